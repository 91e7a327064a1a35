"""Files that are none, garbage in good files, and writing that fails."""

from __future__ import annotations

import os
import re
import sys
from contextlib import suppress

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tcopt.errors import InputError
from tcopt.files import LARGEST_INPUT, read_text, write_atomically
from tcopt.study import load_process, load_study

from .gate import PROCESS, STUDY, changed, write


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"title = 'x'\n[range\n", "found broken TOML: .*line 2.*; accepted: a TOML file"),
        (b"title = 'x'\ntitle = 'y'\n", "found broken TOML: .*line 2"),
        (b"title =", "found broken TOML: "),
        (b"a = " + b"[" * 7000, "found broken TOML: values nested too deeply"),
        (b"a = " + b"9" * 7000, "found broken TOML: .*digits"),
        (
            b"\na" + b".a" * 10**5,
            "line 2: found 200001 characters; accepted: lines of at most 8000",
        ),
        (b"title = '\xff\xfe'", r"found bytes that are not UTF-8 in line 1; accepted: UTF-8 text"),
        ("title = 'x'".encode("utf-16"), r"found bytes that are not UTF-8 in line 1"),
        (b"title = 'x'\n\n# \xe9", r"found bytes that are not UTF-8 in line 3"),
        (b"\0\0\0\0", "found broken TOML: "),
        (b"", "title: found nothing; accepted: one line of text"),
        (b"#" * (LARGEST_INPUT + 1), f"found a file of more than {LARGEST_INPUT} bytes; accepted"),
    ],
    ids=lambda value: value[:20] if isinstance(value, bytes) else "",
)
@pytest.mark.parametrize("load", [load_study, load_process])
def test_file_refused(content, message, load, tmp_path):
    path = tmp_path / "broken.toml"
    path.write_bytes(content)
    with pytest.raises(InputError, match=message) as refused:
        load(path)
    assert str(refused.value).startswith(f"{path}: ")
    assert len(str(refused.value)) < 600 + len(str(path))


@pytest.mark.parametrize(
    ("title", "found"),
    [
        (" = 0x" + "f" * 7000, "a whole number of more than 30 digits"),
        (".a" * 3000 + " = 1", "{'a': {'a': {...}}}"),
        (" = 1979-05-27", "datetime.date(1979, 5, 27)"),
    ],
    ids=["huge", "deep", "date"],
)
def test_whatever_was_found_makes_a_short_message(title, found, tmp_path):
    path = tmp_path / "process.toml"
    path.write_text(f"title{title}\nreference = 300\n[materials.film]\ntc1 = 0\n")
    with pytest.raises(InputError, match=re.escape(f": title: found {found}; accepted: one line")):
        load_process(path)


@pytest.mark.parametrize("load", [load_study, load_process, read_text])
def test_places_where_no_file_is(load, tmp_path):
    with pytest.raises(InputError, match=r"none\.toml: found no such file; accepted: an existing"):
        load(tmp_path / "none.toml")
    with pytest.raises(InputError, match="found a folder; accepted: a text file"):
        load(tmp_path)
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match=r"found a file that cannot be read \(Not a directory\)"):
        load(tmp_path / "file" / "below.toml")
    with pytest.raises(InputError, match=r"'.*a\\x00b': found a file that cannot be read"):
        load(tmp_path / "a\0b")
    with pytest.raises(InputError, match="found a file that cannot be read"):
        load(tmp_path / ("x" * 5000))


@pytest.mark.skipif(sys.platform == "win32", reason="named pipes and links as POSIX has them")
def test_a_pipe_and_a_circle_of_links_are_no_files(tmp_path):
    os.mkfifo(tmp_path / "pipe")
    with pytest.raises(InputError, match="found no plain file; accepted: a text file"):
        load_study(tmp_path / "pipe")
    (tmp_path / "circle").symlink_to(tmp_path / "circle")
    with pytest.raises(InputError, match="found a file that cannot be read"):
        load_study(tmp_path / "circle")


def test_unreadable_file(tmp_path, monkeypatch):
    # The tests may run as root, whom no permission stops.
    def refuse(*_args, **_kwargs):
        raise PermissionError(13, "Permission denied")

    path = write(tmp_path, PROCESS, STUDY)
    monkeypatch.setattr(type(path), "open", refuse)
    with pytest.raises(InputError, match=r"found a file that cannot be read \(Permission denied\)"):
        load_study(path)


def test_process_file_refused_by_its_own_name(tmp_path):
    path = write(tmp_path, None, STUDY)
    with pytest.raises(InputError, match=r"^.*process\.toml: found no such file; accepted"):
        load_study(path)


class TestWriting:
    def test_written_whole(self, tmp_path):
        path = tmp_path / "out.txt"
        write_atomically(path, "\N{OHM SIGN}")
        write_atomically(path, b"second")
        assert path.read_bytes() == b"second"
        assert [each.name for each in tmp_path.iterdir()] == ["out.txt"]

    def test_a_failure_leaves_what_was_there(self, tmp_path, monkeypatch):
        path = tmp_path / "out.txt"
        path.write_text("first")

        def full(_handle):
            raise OSError(28, "No space left on device")

        monkeypatch.setattr(os, "fsync", full)
        with pytest.raises(InputError, match=r"place that cannot be written \(No space left"):
            write_atomically(path, "second")
        assert path.read_text() == "first"
        assert [each.name for each in tmp_path.iterdir()] == ["out.txt"]

    def test_an_interruption_leaves_what_was_there(self, tmp_path, monkeypatch):
        def interrupt(_handle):
            raise KeyboardInterrupt

        monkeypatch.setattr(os, "fsync", interrupt)
        with pytest.raises(KeyboardInterrupt):
            write_atomically(tmp_path / "out.txt", "second")
        assert list(tmp_path.iterdir()) == []

    @pytest.mark.parametrize("place", ["none/out.txt", ".", "a\0b", "x" * 5000])
    def test_places_that_cannot_be_written(self, place, tmp_path):
        with pytest.raises(InputError, match="found a place that cannot be written"):
            write_atomically(tmp_path / place, "text")
        assert list(tmp_path.iterdir()) == []


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    return tmp_path_factory.mktemp("garbage")


@given(content=st.binary(max_size=300) | st.text(max_size=300).map(str.encode))
def test_no_bytes_raise_anything_but_the_one_error(content, folder):
    (folder / "process.toml").write_bytes(content)
    with suppress(InputError):
        load_process(folder / "process.toml")
    with suppress(InputError):
        load_study(folder / "process.toml")
    (folder / "curve.csv").write_bytes(b"temperature [K],current [A]\n" + content)
    changes = {"target": {"shape": "curve", "file": "curve.csv"}}
    with suppress(InputError):
        load_study(write(folder, PROCESS, changed(STUDY, changes)))


def _leaves(table, path=""):
    for key, value in table.items():
        yield f"{path}{key}"
        if isinstance(value, dict):
            yield from _leaves(value, f"{path}{key}.")


SCALARS = (
    st.integers(-(2**63), 2**63 - 1)
    | st.floats()
    | st.booleans()
    | st.datetimes()
    | st.text(st.characters(exclude_categories=["Cs", "Cc"]), max_size=20)
    | st.sampled_from(["10 uA", "-40 degC", "1 ppm/K", "4k7", "5 %", "poly", "npn", "1e300 A"])
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(["from", "to", "material", "value", "a b"]), inner, max_size=3
        )
    ),
    max_leaves=6,
)


@settings(max_examples=300)
@given(
    where=st.sampled_from([*_leaves(STUDY), "resistors.input", "resistors.feed"]),
    value=VALUES,
    there=st.sampled_from(list(_leaves(PROCESS))),
    other=VALUES,
    both=st.booleans(),
)
def test_no_value_anywhere_raises_anything_but_the_one_error(
    where, value, there, other, both, folder
):
    process = changed(PROCESS, {there: other}) if both else PROCESS
    path = write(folder, process, changed(STUDY, {where: value}))
    with suppress(InputError):
        load_study(path)
