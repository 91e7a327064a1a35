"""ptat plus vbe, bipolar, followed transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_core', 'I_out')
UNKNOWNS = ('log_J_core', 'log_I_out', 'V_D')
QUANTITIES = ('I_L', 'M', 'N', 'R_base', 'R_core', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_V_A*x1
    x3 = inverse_beta**(-1.0)
    x4 = x3 + 1
    x5 = x4**(-1.0)
    x6 = inverse_beta*x5 + 1
    x7 = M*x0
    x8 = I_L*M*N
    x9 = x3 + inverse_beta**(-2.0)
    x10 = V_T*log(x6) + V_T*log(V_D*inverse_V_A + 1) - V_T*log(-I_L - x0/x9 + x7 + x8)
    x11 = V_T*log_I_S
    x12 = inverse_beta*x0
    x13 = inverse_beta/x6
    return (-V_T*log_J_core + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x2 - x2 + 1) - inverse_beta*x1 - x1 - x10, I_L*N*R_base + R_base*x0 - R_base*exp(log_I_out) - x10 - x11, V_D + V_T*log(inverse_beta) + V_T*log(x4) - V_T*log(-I_L*x13 + x12 - x12/(x5 + x9 + (inverse_beta + 1)**(-1.0)) + x13*x7 + x13*x8) + x10 + 2*x11)


def across(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_core*exp(log_J_core)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_V_A*x1
    x3 = inverse_beta*x2 + x2
    x4 = V_out*inverse_V_A - x3 + 1
    x5 = inverse_beta*x1 + x1
    x6 = V_D*inverse_V_A + 1
    x7 = inverse_beta**(-1.0)
    x8 = x7 + 1
    x9 = x8**(-1.0)
    x10 = inverse_beta*x9 + 1
    x11 = I_L*M*N
    x12 = M*x0
    x13 = x7 + inverse_beta**(-2.0)
    x14 = -x0/x13 + x12
    x15 = -I_L + x11 + x14
    x16 = V_T*log(x10) - V_T*log(x15) + V_T*log(x6)
    x17 = V_T*log_I_S
    x18 = R_base*exp(log_I_out)
    x19 = inverse_beta/x10
    x20 = inverse_beta*x0
    x21 = x12*x19 + x20 - x20/(x13 + x9 + (inverse_beta + 1)**(-1.0))
    x22 = -I_L*x19 + x11*x19 + x21
    x23 = V_T*x14/x15
    x24 = V_T*inverse_V_A/x6
    x25 = -x24
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x4) - x16 - x5
    f1 = I_L*N*R_base + R_base*x0 - x16 - x17 - x18
    f2 = V_D + V_T*log(inverse_beta) - V_T*log(x22) + V_T*log(x8) + x16 + 2*x17
    a00 = -V_T*x3/x4 - V_T + x23 - x5
    a02 = x25
    a10 = R_base*x0 + x23
    a11 = -x18
    a12 = x25
    a20 = -V_T*x21/x22 - x23
    a22 = x24 + 1
    y0 = a11*f2
    y1 = a00*a22
    y2 = a02*a20
    y3 = (a11*y1 - a11*y2)**(-1.0)
    return (y3*(a02*y0 - a11*a22*f0), y3*(-f0*(-a10*a22 + a12*a20) - f1*(y1 - y2) - f2*(-a00*a12 + a02*a10)), y3*(-a00*y0 + a11*a20*f0))


def partials(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x1
    x3 = x1 + x2
    x4 = inverse_V_A*x1
    x5 = inverse_beta*x4
    x6 = x4 + x5
    x7 = V_out*inverse_V_A - x6 + 1
    x8 = V_D*inverse_V_A
    x9 = x8 + 1
    x10 = inverse_beta**(-1.0)
    x11 = x10 + 1
    x12 = x11**(-1.0)
    x13 = inverse_beta*x12
    x14 = x13 + 1
    x15 = M*x0
    x16 = inverse_beta**2
    x17 = x16**(-1.0)
    x18 = x10 + x17
    x19 = -x0/x18 + x15
    x20 = I_L*N
    x21 = M*x20
    x22 = -I_L + x21
    x23 = x19 + x22
    x24 = V_T*log(x14) - V_T*log(x23) + V_T*log(x9)
    x25 = V_T*log_J_core - V_T*log(N) - V_T*log(x7) + x24
    x26 = exp(log_I_out)
    x27 = R_base*x26
    x28 = V_T*log_I_S
    x29 = x24 + x28
    x30 = x14**(-1.0)
    x31 = I_L*x30
    x32 = x21*x30
    x33 = inverse_beta*x0
    x34 = x15*x30
    x35 = inverse_beta + 1
    x36 = x35**(-1.0)
    x37 = x12 + x36
    x38 = (x18 + x37)**(-1.0)
    x39 = x33*x38
    x40 = inverse_beta*x34 + x33 - x39
    x41 = -inverse_beta*x31 + inverse_beta*x32 + x40
    x42 = V_T*log(inverse_beta) + V_T*log(x11) - V_T*log(x41) + x24 + 2*x28
    x43 = x7**(-1.0)
    x44 = V_T/x23
    x45 = x19*x44
    x46 = V_T/x9
    x47 = inverse_V_A*x46
    x48 = -x47
    x49 = V_T/x41
    x50 = x21*x44
    x51 = -I_L*x44 + x50
    x52 = x15*x44 + x50
    x53 = V_T*x43
    x54 = x46*x8
    x55 = x5*x53
    x56 = x11 + x13
    x57 = (x12 + x56)**(-1.0)
    x58 = V_T*inverse_beta
    x59 = 2*x13
    x60 = x12*x16
    x61 = inverse_beta + x60
    x62 = x10 + 2
    x63 = x61 + x62
    x64 = (x12 + x59 + x63)**(-1.0)
    x65 = I_L*x17
    x66 = I_L*x10
    x67 = 2*x66
    x68 = x16*x36
    x69 = inverse_beta**3
    x70 = x16 + x69
    x71 = x70**(-1.0)
    x72 = x0*x16
    x73 = x71*x72
    x74 = inverse_beta + x16
    x75 = x74**(-1.0)
    x76 = 2*x72
    x77 = 2*x10
    x78 = M*N
    x79 = 2*V_T
    x80 = x0*x79
    x81 = x69**(-1.0)
    x82 = I_L*x81
    x83 = 2*x65
    x84 = 2*x17
    x85 = x33*x36
    x86 = 2*x33
    x87 = x33*x71
    x88 = V_T*x0
    x89 = x57*x58 + x58*x64 + x80/(-x0*x68 + x15*x17 + x15*x77 + x15 + x22 + x65*x78 - x65 + x67*x78 - x67 - x73 - x75*x76) + x88/(x10*x15 + x15*x81 + x15*x84 + x66*x78 - x66 - x75*x86 + x78*x82 + x78*x83 - x82 - x83 - x85 - x87)
    x90 = R_base*x20
    x91 = x0*x60
    x92 = I_L*x16
    x93 = x57*x92
    x94 = 2*x36
    x95 = x10 + x12
    x96 = x75 + x81
    x97 = (x84 + x94 + x95 + x96)**(-1.0)
    x98 = x72*x97
    x99 = x15*x16
    x100 = x57*x99
    x101 = x16*x21
    x102 = x101*x57
    x103 = (x100 + x102 + x41 + x91 - x93 - x98)**(-1.0)
    x104 = x103*x58
    x105 = x104*x21
    x106 = x104*x15
    x107 = inverse_beta**4
    x108 = x107*x12
    x109 = (x108 + x69)**(-1.0)
    x110 = x36*x69
    x111 = x12*x69
    x112 = x111 + x74
    x113 = x111 + x16
    x114 = x113**(-1.0)
    x115 = I_L*x114
    x116 = x60 + x68
    x117 = x0/(x116 + x35)
    x118 = x17 + x77
    x119 = (x118 + 1)**(-1.0)
    x120 = 2*inverse_beta
    x121 = x120 + 1
    x122 = (x121 + x16)**(-1.0)
    x123 = 2*x12
    x124 = x118 + x14
    x125 = (x123 + x124 + x36)**(-1.0)
    x126 = I_L*inverse_beta
    x127 = (x113 + x120 + x14 + 2*x60)**(-1.0)
    x128 = 3*x17 + 3*x36
    x129 = (x128 + x71 + 3*x75 + 3*x81 + x95 + x107**(-1.0))**(-1.0)
    x130 = 3*x10
    x131 = (inverse_beta*x94 + x130 + x17 + x37 + x59 + x61 + x68 + 3)**(-1.0)
    x132 = 4/(x112 + x60)
    x133 = inverse_beta*x36
    x134 = (x13 + x133 + x63 + x68)**(-1.0)
    x135 = 4*x33
    x136 = (x14 + x61)**(-1.0)
    x137 = I_L*x120
    x138 = (x108 + x111 + x70)**(-1.0)
    x139 = (x124 + x133 + x37)**(-1.0)
    x140 = x139*x33
    x141 = (x110 + x113 + x116 + x121)**(-1.0)
    x142 = (x123 + x128 + x130 + x133 + x14 + x96)**(-1.0)
    x143 = x114*x15
    x144 = (inverse_beta + x62)**(-1.0)
    x145 = inverse_beta*x15
    x146 = x114*x21
    x147 = x120*x15
    x148 = inverse_beta*x21
    x149 = x120*x21
    x150 = x0*x10
    x151 = x61**(-1.0)
    x152 = I_L*x151
    x153 = x0/(x133 + x56)
    x154 = x15*x151
    x155 = x151*x21
    x156 = x150 - x152 - x153 + x154 + x155
    x157 = 4*x72
    x158 = 2*x92
    x159 = 2*x99
    x160 = 2*x101
    x161 = x0*x38
    x162 = x0 - x161 - x31 + x32 + x34
    x163 = x101*x125 + x119*x72 - x125*x92 + x125*x99 - x129*x72 + x162
    x164 = x33*x97
    x165 = x0*x69
    x166 = x119*x165
    x167 = I_L*x125
    x168 = x167*x69
    x169 = x129*x165
    x170 = x125*x15
    x171 = x170*x69
    x172 = x125*x21
    x173 = x172*x69
    x174 = 2*x57
    x175 = x0*x59 - x137*x57 + x147*x57 + x149*x57 + x163 - 2*x164
    x176 = (2*x100 + x101*x174 + x166 - x168 - x169 + x171 + x173 + x175 + x41 + 2*x91 - 2*x93 - 2*x98)**(-1.0)
    x177 = V_T*x92
    x178 = x0*x107
    x179 = x174*x69
    x180 = (-I_L*x179 + 2*x0*x111 + 4*x100 + 4*x102 - x107*x167 + x107*x170 + x107*x172 + x119*x178 - x120*x31 + x120*x32 + x120*x34 - x129*x178 + x15*x179 - x16*x161 - x16*x31 + x16*x32 + x16*x34 - 2*x165*x97 + 2*x166 - 2*x168 - 2*x169 + 2*x171 + 2*x173 + x175 + x179*x21 - 2*x39 + x72 + x86 + 4*x91 - 4*x93 - 4*x98)**(-1.0)
    x181 = V_T*x99
    x182 = V_T*x101
    return (
        (-x25 - x3, I_L*N*R_base + R_base*x0 - x27 - x29, V_D + x42),
        ((-V_T*x43*x6 - V_T - x3 + x45, 0, x48), (R_base*x0 + x45, -x27, x48), (-x40*x49 - x45, 0, x47 + 1)),
        ((x51, x52, V_T + x50, 0, V_T*x43*(-inverse_V_A*x0 - inverse_V_A*x33) - x0 - x33, -x25, V_out*inverse_V_A*x53, V_T*V_out*inverse_V_A*x43 - x4*x53 - x54 - x55, -x2 - x55 - x89, 0), (x51 + x90, x52, x50 + x90, x0 + x20 - x26, 0, -x29, 0, -x54, -x89, -V_T), (I_L*V_T*inverse_beta*x103 - x105 - x51, -x105 - x106 - x52, -x105 - x50, 0, 0, x42, 0, x54, I_L*x104 + V_T*x33/(x0*x13 - x126*x136 - x126*x57 + x136*x145 + x136*x148 - x140 + x145*x57 + x148*x57 + x156 + x162 - x164 + x85) + V_T - x105 - x106 - x176*x177 + x176*x181 + x176*x182 - x177*x180 + x180*x181 + x180*x182 - x33*x49 - x58*x75 + x80/(x0*x17 + x101*x127 + x101*x132 - x115 - x117 + x122*x72 - x127*x92 + x127*x99 - x131*x72 - x132*x92 + x132*x99 - x134*x157 - x136*x158 + x136*x159 + x136*x160 - x138*x158 + x138*x159 + x138*x160 - x139*x76 - x141*x76 - x142*x76 + x143 + x144*x76 + x146 + 2*x150 - 2*x152 - 2*x153 + 2*x154 + 2*x155 + x157*x75 - x158*x64 + x159*x64 + x160*x64 + x163 + x72*x94 + 2*x73) + x88/(-I_L*x109 + x0*x81 + x0*x84 - x0/(x110 + x112) + x109*x15 + x109*x21 - 2*x115 - 2*x117 + x119*x33 + x122*x33 - x125*x126 + x125*x145 + x125*x148 - x126*x127 - x126*x132 + x127*x145 + x127*x148 - x129*x33 - x131*x33 + x132*x145 + x132*x148 - x134*x135 + x135*x75 - x136*x137 + x136*x147 + x136*x149 - x137*x138 - x137*x64 + x138*x147 + x138*x149 - 2*x140 - x141*x86 - x142*x86 + 2*x143 + x144*x86 + 2*x146 + x147*x64 + x149*x64 + x156 + x33*x94 + 2*x87) + x89, x79)),
    )


def outputs(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2), log_I_out),
        ((x0*x3, 0, 0), (0, 1, 0)),
        ((x4, 0, x4, 0, 0, 0, 0, 0, 0, 0), (0, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_I_out from the output current."""
    return log(I_out)


def pin_core(log_J_core: Any, V_D: Any, R_core: Any, log_I_out: Any, I_L: Any, M: Any, N: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_V_A*x1
    x3 = inverse_beta*x2 + x2
    x4 = V_out*inverse_V_A - x3 + 1
    x5 = inverse_beta*x1 + x1
    x6 = V_D*inverse_V_A + 1
    x7 = inverse_beta**(-1.0)
    x8 = x7 + 1
    x9 = x8**(-1.0)
    x10 = inverse_beta*x9 + 1
    x11 = I_L*M*N
    x12 = M*x0
    x13 = x7 + inverse_beta**(-2.0)
    x14 = -x0/x13 + x12
    x15 = -I_L + x11 + x14
    x16 = V_T*log(x10) - V_T*log(x15) + V_T*log(x6)
    x17 = V_T*log_I_S
    x18 = inverse_beta/x10
    x19 = inverse_beta*x0
    x20 = x12*x18 + x19 - x19/(x13 + x9 + (inverse_beta + 1)**(-1.0))
    x21 = -I_L*x18 + x11*x18 + x20
    x22 = x4**(-1.0)
    x23 = V_T*x14/x15
    x24 = V_T*inverse_V_A/x6
    x25 = -x24
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x4) - x16 - x5
    f1 = I_L*N*R_base + R_base*x0 - R_base*exp(log_I_out) - x16 - x17
    f2 = V_D + V_T*log(inverse_beta) - V_T*log(x21) + V_T*log(x8) + x16 + 2*x17
    a00 = -V_T*x22*x3 - V_T + x23 - x5
    a01 = x25
    a02 = V_T*x22*(-inverse_V_A*x0 - inverse_V_A*x19) - x0 - x19
    a10 = R_base*x0 + x23
    a11 = x25
    a20 = -V_T*x20/x21 - x23
    a21 = x24 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_base(log_J_core: Any, V_D: Any, R_base: Any, log_I_out: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_V_A*x1
    x3 = inverse_beta*x2 + x2
    x4 = V_out*inverse_V_A - x3 + 1
    x5 = inverse_beta*x1 + x1
    x6 = V_D*inverse_V_A + 1
    x7 = inverse_beta**(-1.0)
    x8 = x7 + 1
    x9 = x8**(-1.0)
    x10 = inverse_beta*x9 + 1
    x11 = I_L*N
    x12 = M*x11
    x13 = M*x0
    x14 = x7 + inverse_beta**(-2.0)
    x15 = -x0/x14 + x13
    x16 = -I_L + x12 + x15
    x17 = V_T*log(x10) - V_T*log(x16) + V_T*log(x6)
    x18 = V_T*log_I_S
    x19 = exp(log_I_out)
    x20 = inverse_beta/x10
    x21 = inverse_beta*x0
    x22 = x13*x20 + x21 - x21/(x14 + x9 + (inverse_beta + 1)**(-1.0))
    x23 = -I_L*x20 + x12*x20 + x22
    x24 = V_T*x15/x16
    x25 = V_T*inverse_V_A/x6
    x26 = -x25
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x4) - x17 - x5
    f1 = I_L*N*R_base + R_base*x0 - R_base*x19 - x17 - x18
    f2 = V_D + V_T*log(inverse_beta) - V_T*log(x23) + V_T*log(x8) + x17 + 2*x18
    a00 = -V_T*x3/x4 - V_T + x24 - x5
    a01 = x26
    a10 = R_base*x0 + x24
    a11 = x26
    a12 = x0 + x11 - x19
    a20 = -V_T*x22/x23 - x24
    a21 = x25 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"core": (pin_core, ('log_J_core', 'V_D', 'R_core'), (1, 2)), "base": (pin_base, ('log_J_core', 'V_D', 'R_base'), (0, 2))}
