"""Source listings of an invented plant, in three languages: friction, sections, equations of state, heat, money.

`LISTINGS` holds the texts; what they say is in the tests, as `Expected`.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from surefoot.equation.pasting import Pasted

FORTRAN: Mapping[str, str] = {
    "penstock friction, fixed form": """\
      REAL*8 FUNCTION FRIC(F)
C     PENSTOCK 2, COLEBROOK-WHITE
      REAL*8 F, EPS, D, RE, X
      PARAMETER (EPS = 4.5D-5, D = 1.2D0)
      RE = 1.05D+06
      X = 2.51/(RE*DSQRT(F))
      FRIC = 1.0/DSQRT(F) + 2.0*DLOG10(EPS/(3.7*D)
     &       + X)
      RETURN
      END
""",
    "tailrace depth, free form": """\
program tailrace
  implicit none
  integer, parameter :: dp = kind(1.0d0)
  real(dp), parameter :: b = 3.0_dp, z = 1.5_dp, g = 9.81_dp
  real(dp) :: y, area, wet, q
  area = (b + z*y)*y              ! flow area
  wet  = b + 2.0_dp*y*sqrt(1.0_dp &
       & + z**2)
  q = area/n*(area/wet)**(2.0_dp/3.0_dp)*sqrt(8.0e-4_dp) - qd
end program tailrace
""",
    "normal depth with an integer quotient": """\
      A = (B + Z*Y)*Y
      P = B + 2*Y*SQRT(1 + Z**2)
      R = A/P
      RES = A/0.025D0*R**(2/3)*SQRT(S) - QD
""",
    "accumulator, cubic equation of state": """\
! Redlich-Kwong, nitrogen
RGAS = 83.14D0
TC = 126.2D0; PC = 34.0D0
A = 0.42748D0*RGAS**2*TC**2.5D0/PC
B = 0.08664D0*RGAS*TC/PC
F = RGAS*T/(V - B) - A/(DSQRT(T)*V*(V + B)) - P
""",
    "friction in single precision": """\
      X1 = 2.51/RE
      X2 = 1.0/3.0
      X3 = SQRT(2.0)
      X4 = 0.5*RE
      X5 = EXP(0.1)
""",
    "a statement function": """\
      F(X) = X**3 - 2.0D0*X - 5.0D0
""",
    "integers by name and by declaration": """\
      INTEGER IP, K2
      N = 3
      IP = 7
      H = 1.0D0/N
      W = 1/N
      U = (IP + 1)/2
      V = 2/K
      K2 = 2.7D0
""",
    "an if block": """\
re = v*d/nu
f = 64.0d0/re
if (re > 4000.0d0) then
   f = 0.3164d0/re**0.25d0
end if
dh = f*len/d*v**2/(2.0d0*g)
""",
    "a loop of fixed-point steps": """\
      XK = 0.02D0
      DO 10 I = 1, 50
      XK = 1.0D0/(2.0D0*LOG10(EPS/3.7D0 + 2.51D0/(RE*SQRT(XK))))**2
   10 CONTINUE
      WRITE(*,*) XK
""",
    "angles and signs": """\
phi = 30.0d0
s = sind(phi) + atan2d(1.0d0, x)
w = sign(2.0d0, x - 1.0d0)
m = merge(x, 0.0d0, x > 0.0d0 .and. x .lt. 5.0d0)
j = nint(x)
""",
    "sequence numbers behind column 72": """\
      X = (A + B)*2.0D0                                                 FRIC0010
     1    - C                                                           FRIC0020
C A COMMENT
*     ANOTHER
      Y = ALOG(X)
""",
    "members of a derived type": """\
type(pipe) :: line
reynolds = line%v*line%d/nu
Res = 64.0d0/reynolds - f
""",
    "continued in every way": """\
REAL(8) :: t1, t2
T1 = a + &      ! first
     ! only a comment
     b
T2 = 1.5&
     &0d0*T1 &
     - c
""",
}

C: Mapping[str, str] = {
    "penstock friction": """\
#include <math.h>
#define RE 1.05e6
static const double eps = 4.5e-5;

double residual(double f, double d) {
    /* Colebrook-White,
       in the form of the log */
    double x = 2.51 / (RE * sqrt(f));
    return 1 / sqrt(f) + 2 * log10(eps / (3.7 * d) + x);
}

int main(void) { printf("%g\\n", residual(0.02, 1.2)); return 0; }
""",
    "tailrace depth": """\
double f(double y) {
    const double b = 3.0, z = 1.5, n = 0.025;
    double A = (b + z*y)*y;
    double P = b + 2*y*sqrt(1 + pow(z, 2));
    double R = pow(A/P, 2/3);
    return A/n*R*sqrt(0.0008) - 12.0;
}
""",
    "accumulator, cubic equation of state": """\
const double R = 83.14, Tc = 126.2, Pc = 34.0;
double a = 0.42748*pow(R, 2)*pow(Tc, 2.5)/Pc;
double b = 0.08664*R*Tc/Pc;
res = R*T/(V - b) - a/(sqrt(T)*V*(V + b)) - P;
""",
    "single precision suffixes": """\
float x = 2.51f/Re;
double y = 0.5f*Re;
double z = 1.0f/3.0f;
float w = 0.1;
double v = sqrtf(x);
""",
    "a conditional value": """\
double Re = v*d/nu;
double f = Re < 2300.0 ? 64.0/Re : Re < 4000 && d > 0.1 ? 0.03 : 0.3164/pow(Re, 0.25);
""",
    "casts and whole numbers": """\
int n = 7;
double a = 1/3, b = (double)1/3, c = 7/2*2.0;
double d = n/2;
double e = (int)(x/2) + (float)y;
double g = 1/m;
""",
    "members and pointers": """\
double re = pipe->v*pipe.d/nu;
double r = std::log(re) + std::pow(re, 0.5);
""",
    "new values for old names": """\
x = x/1000;
double t = 1.0;
t = t + x;
t = t*t;
y = t;
""",
    "odd literals": """\
double a = 0x10, b = 010, c = 1'000.5, d = 2.5e+3, e = 1.5L, f = 3UL;
""",
    "logarithms": """\
double a = log(x) + log(y), b = log10(x), c = log2(x), d = exp(-x), e = fabs(x) + abs(y);
""",
    "a loop and an if": """\
double x = 0.02;
for (int i = 0; i < 50; i++) {
    x = g(x);
    if (x < 0) { break; }
}
double y = 2*x;
if (y > 1) y = 1;
z = y + 1;
""",
    "constants of the library": """\
double area = M_PI*d*d/4;
double w = 2*PI*n/60;
double k = hypot(a, b) + cbrt(c) + tgamma(d) + j0(x) + jn(2, x);
""",
    "a method in a namespace": """\
namespace plant {
double Pipe::residual(double v) const {
    return v*d/nu - 2300;
}
}
""",
    "comments inside": """\
double a = b /* breadth */ + c // and the rest
         + d;
""",
}

PYTHON: Mapping[str, str] = {
    "penstock friction": """\
import math

eps, d = 4.5e-5, 1.2
Re = 1.05e6


def residual(f, d=1.2, eps=4.5e-5):
    \"\"\"Colebrook-White.\"\"\"
    x = 2.51 / (Re * math.sqrt(f))
    return 1 / math.sqrt(f) + 2 * math.log10(eps / (3.7 * d) + x)  # zero at the friction factor


print(brentq(residual, 0.01, 0.1))
""",
    "tailrace depth": """\
b = 3.0
z = 1.5
n = 0.025
Qd = 12.0
def f(y):
    A = (b + z*y)*y
    P = (b
         + 2*y*np.sqrt(1 + z**2))  # wetted
    return A/n*(A/P)**(2/3)*np.sqrt(0.0008) - Qd
""",
    "accumulator, cubic equation of state": """\
R = 83.14
Tc, Pc = 126.2, 34.0
T = 293.15
P = 200.0
a = 0.42748*R**2*126.2**2.5/34.0
b = 0.08664*R*126.2/34.0
res = R*T/(V - b) - a/(T**0.5*V*(V + b)) - P
""",
    "a lambda": """\
f = lambda x, n=5: x**n - \\
    math.exp(-x)
""",
    "critical depth, a bare residual": """\
Q = 12.0
g = 9.81
A = (3.0 + 1.5*y)*y
T = 3.0 + 2*1.5*y
Q**2*T - g*A**3
""",
    "heat exchanger outlet": """\
dt1 = Thi - tco
dt2 = Tho - tci
lmtd = dt1 if dt1 == dt2 else (dt1 - dt2)/math.log(dt1/dt2)
U*A*lmtd - mc*(tco - tci)
""",
    "whole-number division": """\
k = 7//2
h = x//3
q = 7/2
""",
    "angles": """\
th = np.radians(30.0)
s = math.sin(math.radians(phi))
d = np.degrees(np.arctan2(y, x))
""",
    "members": """\
class Pipe:
    def reynolds(self, v):
        re = v*self.pipe.d/self.nu
        return re - 2300, self.pipe.d/self.nu
""",
    "two-argument logarithm and friends": """\
a = math.log(x, 10)
b = math.log(x) + np.log(x)
c = max(a, b, 0.1) + min(a, 2) + pow(a, 2) + abs(b)
d = np.where(x > 0, np.square(x), -x)
e = 2*math.pi*math.e
""",
    "special functions": """\
from scipy import special
from scipy.stats import norm
y = special.jv(0, x) + special.exp1(x) + norm.cdf(x) + special.gammaln(x) + math.erf(x)
""",
    "annotated, chained, skipped": """\
x: float = 2.5
a = b = 0.5
for i in range(3):
    a = a*2
c = a + b
d = load("table.csv")["q"]
e = d + 1
assert e
""",
    "feed-in contract, yield": """\
def npv(i, price=700.89):
    r = i/200
    annuity = (1 - (1 + r)**-36)/r
    redemption = 1_000/(1 + r)**36
    value = 30*annuity + redemption
    return value - price
""",
}

LISTINGS: Mapping[str, Mapping[str, str]] = {"fortran": FORTRAN, "c": C, "python": PYTHON}


@dataclass(frozen=True)
class Expected:
    """What a listing says; `needed` holds names with blanks between, `skipped` the lines that are not read, and why."""

    definitions: Mapping[str, str] = field(default_factory=dict)
    inputs: Mapping[str, str] = field(default_factory=dict)
    equation: str = ""
    unknown: str = ""
    needed: str = ""
    skipped: Mapping[int, str] = field(default_factory=dict)

    @classmethod
    def of(cls, pasted: Pasted) -> Expected:
        return cls(
            {line.name: line.text for line in pasted.definitions},
            {given.name: given.value for given in pasted.inputs},
            pasted.equation,
            pasted.unknown,
            " ".join(pasted.names_needed),
            {skipped.line: skipped.why for skipped in pasted.skipped},
        )
