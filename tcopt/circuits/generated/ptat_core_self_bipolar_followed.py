"""ptat core, bipolar, followed transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out', 'V_D')
QUANTITIES = ('I_L', 'M', 'N', 'R_core', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_out)
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
    x11 = inverse_beta*x0
    x12 = inverse_beta/x6
    return (-V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x2 - x2 + 1) - inverse_beta*x1 - x1 - x10, V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x4) - V_T*log(-I_L*x12 + x11 - x11/(x5 + x9 + (inverse_beta + 1)**(-1.0)) + x12*x7 + x12*x8) + x10)


def across(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_core*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
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
    x17 = inverse_beta/x10
    x18 = inverse_beta*x0
    x19 = x12*x17 + x18 - x18/(x13 + x9 + (inverse_beta + 1)**(-1.0))
    x20 = -I_L*x17 + x11*x17 + x19
    x21 = V_T*x14/x15
    x22 = V_T*inverse_V_A/x6
    f0 = -V_T*log_J_out + V_T*log(N) + V_T*log(x4) - x16 - x5
    f1 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) - V_T*log(x20) + V_T*log(x8) + x16
    a00 = -V_T*x3/x4 - V_T + x21 - x5
    a01 = -x22
    a10 = -V_T*x19/x20 - x21
    a11 = x22 + 1
    y0 = (a00*a11 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
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
    x20 = M*N
    x21 = I_L*x20
    x22 = -I_L + x21
    x23 = x19 + x22
    x24 = V_T*log(x14) - V_T*log(x23) + V_T*log(x9)
    x25 = V_T*log_J_out - V_T*log(N) - V_T*log(x7) + x24
    x26 = x14**(-1.0)
    x27 = I_L*x26
    x28 = inverse_beta*x27
    x29 = inverse_beta*x0
    x30 = x15*x26
    x31 = inverse_beta + 1
    x32 = x31**(-1.0)
    x33 = x12 + x32
    x34 = (x18 + x33)**(-1.0)
    x35 = x29*x34
    x36 = inverse_beta*x30 + x29 - x35
    x37 = x20*x28 - x28 + x36
    x38 = 2*V_T
    x39 = V_T*log(inverse_beta) + V_T*log(x11) - V_T*log(x37) + log_I_S*x38 + x24
    x40 = x7**(-1.0)
    x41 = V_T/x23
    x42 = x19*x41
    x43 = V_T/x9
    x44 = inverse_V_A*x43
    x45 = V_T/x37
    x46 = x21*x41
    x47 = -I_L*x41 + x46
    x48 = x15*x41 + x46
    x49 = V_T*x40
    x50 = x43*x8
    x51 = x49*x5
    x52 = x11 + x13
    x53 = (x12 + x52)**(-1.0)
    x54 = V_T*inverse_beta
    x55 = 2*x13
    x56 = x12*x16
    x57 = inverse_beta + x56
    x58 = x10 + 2
    x59 = x57 + x58
    x60 = (x12 + x55 + x59)**(-1.0)
    x61 = inverse_beta**3
    x62 = x61**(-1.0)
    x63 = I_L*x62
    x64 = I_L*x17
    x65 = 2*x64
    x66 = I_L*x10
    x67 = 2*x17
    x68 = x29*x32
    x69 = inverse_beta + x16
    x70 = x69**(-1.0)
    x71 = 2*x29
    x72 = x16 + x61
    x73 = x72**(-1.0)
    x74 = x29*x73
    x75 = V_T*x0
    x76 = 2*x66
    x77 = x16*x32
    x78 = x0*x16
    x79 = x73*x78
    x80 = 2*x78
    x81 = 2*x10
    x82 = x0*x38
    x83 = x53*x54 + x54*x60 + x75/(x10*x15 + x15*x62 + x15*x67 + x20*x63 + x20*x65 + x20*x66 - x63 - x65 - x66 - x68 - x70*x71 - x74) + x82/(-x0*x77 + x15*x17 + x15*x81 + x15 + x20*x64 + x20*x76 + x22 - x64 - x70*x80 - x76 - x79)
    x84 = x0*x56
    x85 = I_L*x16
    x86 = x53*x85
    x87 = 2*x32
    x88 = x10 + x12
    x89 = x62 + x70
    x90 = (x67 + x87 + x88 + x89)**(-1.0)
    x91 = x78*x90
    x92 = x15*x16
    x93 = x53*x92
    x94 = x16*x21
    x95 = x53*x94
    x96 = (x37 + x84 - x86 - x91 + x93 + x95)**(-1.0)
    x97 = x54*x96
    x98 = x21*x97
    x99 = x15*x97
    x100 = inverse_beta**4
    x101 = x100*x12
    x102 = (x101 + x61)**(-1.0)
    x103 = I_L*x102
    x104 = x32*x61
    x105 = x12*x61
    x106 = x105 + x69
    x107 = x105 + x16
    x108 = x107**(-1.0)
    x109 = I_L*x108
    x110 = 2*x109
    x111 = x56 + x77
    x112 = x0/(x111 + x31)
    x113 = x17 + x81
    x114 = (x113 + 1)**(-1.0)
    x115 = 2*inverse_beta
    x116 = x115 + 1
    x117 = (x116 + x16)**(-1.0)
    x118 = 2*x12
    x119 = x113 + x14
    x120 = (x118 + x119 + x32)**(-1.0)
    x121 = I_L*inverse_beta
    x122 = (x107 + x115 + x14 + 2*x56)**(-1.0)
    x123 = 3*x17 + 3*x32
    x124 = (x123 + 3*x62 + 3*x70 + x73 + x88 + x100**(-1.0))**(-1.0)
    x125 = 3*x10
    x126 = (inverse_beta*x87 + x125 + x17 + x33 + x55 + x57 + x77 + 3)**(-1.0)
    x127 = 4/(x106 + x56)
    x128 = inverse_beta*x32
    x129 = (x128 + x13 + x59 + x77)**(-1.0)
    x130 = 4*x29
    x131 = (x14 + x57)**(-1.0)
    x132 = I_L*x115
    x133 = (x101 + x105 + x72)**(-1.0)
    x134 = (x119 + x128 + x33)**(-1.0)
    x135 = x134*x29
    x136 = (x104 + x107 + x111 + x116)**(-1.0)
    x137 = (x118 + x123 + x125 + x128 + x14 + x89)**(-1.0)
    x138 = x108*x15
    x139 = (inverse_beta + x58)**(-1.0)
    x140 = inverse_beta*x15
    x141 = x115*x15
    x142 = inverse_beta*x21
    x143 = x115*x21
    x144 = x0*x10
    x145 = x57**(-1.0)
    x146 = I_L*x145
    x147 = x0/(x128 + x52)
    x148 = x145*x15
    x149 = x144 + x146*x20 - x146 - x147 + x148
    x150 = 2*x146
    x151 = 4*x78
    x152 = 2*x85
    x153 = 2*x92
    x154 = 2*x94
    x155 = x0*x34
    x156 = x20*x27
    x157 = x0 - x155 + x156 - x27 + x30
    x158 = x114*x78 - x120*x85 + x120*x92 + x120*x94 - x124*x78 + x157
    x159 = x29*x90
    x160 = x0*x61
    x161 = x114*x160
    x162 = I_L*x120
    x163 = x162*x61
    x164 = x124*x160
    x165 = x120*x15
    x166 = x165*x61
    x167 = x120*x21
    x168 = x167*x61
    x169 = 2*x53
    x170 = x0*x55 - x132*x53 + x141*x53 + x143*x53 + x158 - 2*x159
    x171 = (x161 - x163 - x164 + x166 + x168 + x169*x94 + x170 + x37 + 2*x84 - 2*x86 - 2*x91 + 2*x93)**(-1.0)
    x172 = V_T*x85
    x173 = x0*x100
    x174 = x16*x27
    x175 = x169*x61
    x176 = (-I_L*x175 + 2*x0*x105 - x100*x162 + x100*x165 + x100*x167 + x114*x173 + x115*x156 - x115*x27 + x115*x30 - x124*x173 + x15*x175 - x155*x16 + x16*x30 - 2*x160*x90 + 2*x161 - 2*x163 - 2*x164 + 2*x166 + 2*x168 + x170 + x174*x20 - x174 + x175*x21 - 2*x35 + x71 + x78 + 4*x84 - 4*x86 - 4*x91 + 4*x93 + 4*x95)**(-1.0)
    x177 = V_T*x92
    x178 = V_T*x94
    return (
        (-x25 - x3, V_D + x39),
        ((-V_T*x40*x6 - V_T - x3 + x42, -x44), (-x36*x45 - x42, x44 + 1)),
        ((x47, x48, V_T + x46, V_T*x40*(-inverse_V_A*x0 - inverse_V_A*x29) - x0 - x29, -x25, V_out*inverse_V_A*x49, V_T*V_out*inverse_V_A*x40 - x4*x49 - x50 - x51, -x2 - x51 - x83, 0), (I_L*V_T*inverse_beta*x96 - x47 - x98, -x48 - x98 - x99, -x46 - x98, 0, x39, 0, x50, I_L*x97 + V_T*x29/(x0*x13 - x121*x131 - x121*x53 + x131*x140 + x131*x142 - x135 + x140*x53 + x142*x53 + x149 + x157 - x159 + x68) + V_T - x171*x172 + x171*x177 + x171*x178 - x172*x176 + x176*x177 + x176*x178 - x29*x45 - x54*x70 + x75/(x0*x62 + x0*x67 - x0/(x104 + x106) + x102*x15 + x103*x20 - x103 + x110*x20 - x110 - 2*x112 + x114*x29 + x117*x29 - x120*x121 + x120*x140 + x120*x142 - x121*x122 - x121*x127 + x122*x140 + x122*x142 - x124*x29 - x126*x29 + x127*x140 + x127*x142 - x129*x130 + x130*x70 - x131*x132 + x131*x141 + x131*x143 - x132*x133 - x132*x60 + x133*x141 + x133*x143 - 2*x135 - x136*x71 - x137*x71 + 2*x138 + x139*x71 + x141*x60 + x143*x60 + x149 + x29*x87 + 2*x74) + x82/(x0*x17 + x109*x20 - x109 - x112 + x117*x78 - x122*x85 + x122*x92 + x122*x94 - x126*x78 - x127*x85 + x127*x92 + x127*x94 - x129*x151 - x131*x152 + x131*x153 + x131*x154 - x133*x152 + x133*x153 + x133*x154 - x134*x80 - x136*x80 - x137*x80 + x138 + x139*x80 + 2*x144 - 2*x147 + 2*x148 + x150*x20 - x150 + x151*x70 - x152*x60 + x153*x60 + x154*x60 + x158 + x78*x87 + 2*x79) + x83 - x98 - x99, x38)),
    )


def outputs(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2),),
        ((x0*x3, 0),),
        ((x4, 0, x4, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_core(V_D: Any, R_core: Any, log_J_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = inverse_V_A*x1
    x3 = V_out*inverse_V_A - inverse_beta*x2 - x2 + 1
    x4 = V_D*inverse_V_A + 1
    x5 = inverse_beta**(-1.0)
    x6 = x5 + 1
    x7 = x6**(-1.0)
    x8 = inverse_beta*x7 + 1
    x9 = M*x0
    x10 = I_L*M*N
    x11 = x5 + inverse_beta**(-2.0)
    x12 = V_T*log(x4) + V_T*log(x8) - V_T*log(-I_L - x0/x11 + x10 + x9)
    x13 = inverse_beta*x0
    x14 = inverse_beta/x8
    x15 = V_T*inverse_V_A/x4
    f0 = -V_T*log_J_out + V_T*log(N) + V_T*log(x3) - inverse_beta*x1 - x1 - x12
    f1 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x6) - V_T*log(-I_L*x14 + x10*x14 + x13 - x13/(x11 + x7 + (inverse_beta + 1)**(-1.0)) + x14*x9) + x12
    a00 = -x15
    a01 = V_T*(-inverse_V_A*x0 - inverse_V_A*x13)/x3 - x0 - x13
    a10 = x15 + 1
    y0 = a10**(-1.0)
    return (-f1*y0, -y0*(-a00*f1 + a10*f0)/a01)


PINS = {"core": (pin_core, ('V_D', 'R_core'), (1,))}
