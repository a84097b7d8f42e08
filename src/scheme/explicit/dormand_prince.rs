//! The pair of Dormand and Prince, 5(4): it propagates order 5, and its last stage is the first of the next step.
//! Source: J. R. Dormand & P. J. Prince (1980), J. Comput. Appl. Math. 6, 19-26; Hairer, Nørsett & Wanner I (2nd
//! ed. 1993), sect. II.4.
//! The interpolant is the quartic of order 4 of L. F. Shampine (1986), Math. Comp. 46, 135-150; Hairer, Nørsett &
//! Wanner I, sect. II.6. It needs no further rate, and joins from step to step with a continuous slope.
//! Variant: the formula (6.12) of that section is of degree 5; the quartic is what remains of its last factors at
//! theta = 1/2. The 1980 paper names its pair RK5(4)7M.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const DORMAND_PRINCE: Drawn = Drawn {
    key: "dormand-prince",
    name: "Dormand-Prince 5(4)",
    source: "J. R. Dormand & P. J. Prince (1980), J. Comput. Appl. Math. 6, 19-26",
    serves: "The scheme to start with where a tolerance is given, the rates are smooth and not stiff.",
    claim: Claim { order: 5, embedded: Some(4), first_same_as_last: true },
    inside: Inside::Matched { interpolant: INTERPOLANT, lifts: 1 },
    tableau: "
       0   |
      1/5  |      1/5
      3/10 |      3/40         9/40
      4/5  |     44/45       -56/15        32/9
      8/9  |  19372/6561  -25360/2187   64448/6561  -212/729
       1   |   9017/3168    -355/33     46732/5247    49/176    -5103/18656
       1   |     35/384         0         500/1113   125/192    -2187/6784      11/84
     ------|------------------------------------------------------------------------------
       b   |     35/384         0         500/1113   125/192    -2187/6784      11/84     0
       b^  |   5179/57600       0        7571/16695  393/640   -92097/339200   187/2100  1/40
",
};

pub(super) const INTERPOLANT: &str = "
    theta^1 |                        1  0                         0                        0                          0                      0                    0
    theta^2 |   -8048581381/2820520608  0  131558114200/32700410799    -1754552775/470086768   127303824393/49829197408   -282668133/205662961    40617522/29380423
    theta^3 |    8663915743/2820520608  0  -68118460800/10900136933   14199869525/1410260304  -318862633887/49829197408   2019193451/616988883  -110615467/29380423
    theta^4 | -12715105075/11282082432  0   87487479700/32700410799  -10690763975/1880347072  701980252875/199316789632  -1453857185/822651844    69997945/29380423
";
