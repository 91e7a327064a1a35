"""Values from outside the project, each with its source beside it.

"calc" is exact arithmetic on the model that the source quotes; "memory" is recalled, not seen
in print.
"""
