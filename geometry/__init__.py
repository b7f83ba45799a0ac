"""What a surveyor computes about stakes: pure computation, arrays in, answers out.

Points are (E, N) in metres, azimuths radians clockwise from north, offsets right
positive, covariances m². Every error is a `GeometryError` that says what is wrong,
where, and what to do. Each package lists its public names by the question they answer;
import a name from its package: `from geometry.cogo import inverse`.

geometry.units
==============
Units, angles and stations: the texts people write, and the exact values behind.

What is a length?
    Unit             metre, international foot, US survey foot, exactly
    Length           the text as entered, its unit, and whole nanometres
    feet_inches      a length printed in feet, inches and fractions
    chains           the length of an old deed's chains, rods and links
    AreaUnit         square metres, feet, hectares and acres, exactly
    area_text        a computed area printed in a unit

What is a direction?
    AngleUnit        how a job writes angles: degrees-minutes-seconds, degrees, gon
    Angle            the text as entered and its exact seconds of arc
    angle_text       a signed angle printed
    azimuth_text     a direction from north, clockwise, printed
    bearing_text     a direction printed as quadrant and angle
    turn_text        a turn printed with its side, R or L
    full_turn        an angle brought into [0, 2 pi)
    half_turn        an angle brought into [-pi, pi)
    mean_direction   the mean of directions across north

Where along a line?
    Station          a station's text read and printed, with its region

geometry.frames
===============
Frames: which surface coordinates and distances are on, and how to cross over.

What does a ground distance measure on the grid?
    elevation_factor   ellipsoid distance over ground distance
    combined_factor    grid distance over ground distance
    line_scale         the grid scale of a long line
    second_term        arc-to-chord correction t - T of a Lambert zone
    grid_azimuth       grid azimuth from the geodetic one
    MEAN_RADIUS_M      the Earth's mean radius these rest on

Which surface is this on?
    GridFrame          a map projection's plane
    GroundFrame        a project's ground plane over a grid; crosses both ways
    GridPoints         points that only their grid accepts
    GroundPoints       points that only their ground plane accepts
    GridDistance       a distance on a grid
    GroundDistance     a distance on the ground

Where is it in another system? (needs the epsg extra)
    transformed        points from one EPSG system to another, with the exactness
    Transformed        the points, the operation, its accuracy, what was missing
    grid_scale         grid scale and convergence of a projection at places
    GridScale          the scales and convergences
    EpsgUnavailable    the extra is not installed, or the code is not known

geometry.cogo
=============
Coordinate geometry: points, lines, circles, traverses and level runs.

How do two points lie to each other?
    inverse                 azimuth and distance from one to the other -> Inverse
    inverses                the same for many -> Inverses
    forward                 the point at an azimuth and distance
    forwards                many points from one
    angle_at                the clockwise angle between two marks

Where do they meet?
    directions_cross        direction and direction -> Crossing
    lines_cross             two lines through two points each -> Crossing
    direction_and_distance  direction and distance -> up to two Crossings
    line_and_circle         line through two points and circle
    distances_cross         distance and distance, circle and circle
    crossing_angle          how well two lines cross at a point

Where does a point stand against a line?
    offsets_from_line       distance along and offset right -> Offsets
    points_off_line         the points at distances along and offsets

Where do I stand?
    resection               from directions to three marks -> Resection
    NEAR_CIRCLE             clearance from the danger circle below which it is weak

How large is it?
    area                    area of a figure, with arcs -> Area
    segment_area            between a chord and its arc

Does it close?
    traverse                courses closed and balanced by compass rule -> Traverse
    carried_azimuths        azimuths from the first and the angles
    balanced_loop_angles    angles of a closed figure -> BalancedAngles
    balanced_link_angles    angles between two known azimuths -> BalancedAngles
    level_notes             rod readings reduced -> LevelNotes
    level_run               a level loop or line closed and adjusted -> LevelRun
    linear_closure          traverse misclosure against a class -> Closure
    angular_closure         angular misclosure against a class -> Closure
    level_closure           level misclosure against a class -> Closure
    TraverseClass, TRAVERSE_CLASSES
    LevelClass, LEVEL_LOOP_CLASSES, LEVEL_SECTION_CLASSES

geometry.corrections
====================
Corrections: what a tape, a long sight and an instrument add to the truth.

How long is it really, by steel tape?
    SteelTape            a tape as calibrated
    Pulled               how it was used: temperature, tension, supports
    tape_corrections     the corrections of one reading -> TapeCorrections
    measured_length      true level length of a reading
    length_to_lay_out    reading to lay out for a true length
    normal_tension_n     the pull at which sag and stretch cancel
    slope_to_level       horizontal length of a slope length
How much does the Earth bend a sight?
    curvature_m, refraction_m, curvature_and_refraction_m
What does the instrument add?
    edm_distance         slope distance with prism constant and ppm corrected
    atmospheric_ppm      parts per million for temperature and pressure
    edm_sigma_m          standard deviation of a distance, constant and ppm part

geometry.curves
===============
Curves: the shapes a road, a curb or a grade is made of.

How long and how far out is this horizontal curve?
    circular_curve    T, L, E, M, chord of a radius and a deflection -> CircularCurve
    radius_of_degree  radius of a degree of curve, arc or chord definition
    curve_stakes      deflections and chords that set a curve out -> CurveStakes
    middle_ordinate   from chord to arc
    chord_for_ordinate  the longest chord that stays within a middle ordinate
    HUNDRED_FEET_M    base of the degree of curve
What does easing into it take?
    spiral            elements of one spiral -> Spiral
    spiraled_curve    spiral, arc, spiral between two tangents -> SpiraledCurve
    path              where linearly changing curvature leads -> Path
How does the grade run?
    vertical_curve    parabola between two grades -> VerticalCurve
    elevations_on_curve  elevations on it
    length_through    the length that passes through a fixed point
How is a corner rounded?
    curb_return       radius point, ends, equal parts, offset stakes -> CurbReturn

geometry.alignment
==================
Alignments: where along a line, how far off it, and how high it should be there.

What is the line?
    straight, arc, spiral_element   its elements -> Element
    alignment           elements strung from a start and an azimuth -> Alignment
    alignment_through   the line through points of intersection and their Bend
    main_points         PC, PT, TS, SC, PRC, AP ... -> MainPoint
    total_turn_rad, sharpest_radius_m  how much it turns, and how sharply
Where is distance along and offset on the ground?
    place               distances and offsets to points -> Placed
Where on the line is this point?
    stations_and_offsets  many points to distance and offset -> OnLine
    feet_of             every foot of one point, or the one near a hint -> Foot
What does the stationing call it?
    stationing          regions from (back, ahead) equations -> Stationing
    stations_at         distances to stations -> Stations
    places_of           every place a station names -> StationPlace
    distance_of         the one distance a station names
How high is the design there?
    pvi, profile        points of vertical intersection to a Profile -> Pvi
    grade_at            elevations and grades -> Grade
    turning_points      its high and low points -> TurningPoint

geometry.section
================
Sections: how high the design is across a line, and where it meets the ground.

How high should it be at this station and offset?
    strip, strip_table   lanes and shoulders with superelevation -> Strip
    roadway              a profile with strips on both sides -> Roadway
    surface_at           design elevations at stations and offsets -> Surface
    breaks_at            the section's breaks on one side -> Breaks
How much to cut or fill?
    cut_fill             measured against design -> CutFill
    ladder               from a reference hub to each break -> Ladder
Where does the slope meet the ground?
    section_ground       the ground as shot -> Ground
    ground_at            its elevation at an offset
    SideSlopes           cut and fill slopes, and the ditch
    catch_point          every crossing, exactly -> Catch of CatchPoint
    trial_shot           the crew's trial and move -> Trial
    settles              whether trial and move will end

geometry.layout
===============
Laying out a building: where its offset stakes go, and what proves them.

Where do the stakes go?
    plan_offsets           footprint and depth to stakes at line ends -> OffsetPlan
    Stake, Status, Role    one stake: where, how its place came about, what it is for
    LineEnd                one end of a line, its stake or why it has none
    plain_set              the plan's own stakes -> StakeSet
    minimal_set            the fewest: one stake where two lines cross
    robust_set             one spare on every line
    near_and_far           a second stake beyond the first, on one line
    frame_set              the enclosing rectangle as four stakes
    Fallback, FallbackKind what can be done where there is no room
    board_nails            where lines cross a batter board -> Board of Nail
What is the building?
    principal_direction    the direction of its walls -> PrincipalDirection
    enclosing_rectangle    the rectangle in that direction -> EnclosingRectangle
    WallLine, LineKind     a line that stakes hold
    column_grid            named gridlines and their crossings -> Gridline, GridPoint
    arc, Arc, chord_for    curved walls, and chords within a tolerance
Where may nobody stand or dig?
    excavation             the limit for placing stakes -> Excavation
    Soil, Ground           classification, and conditions that ask for an engineer
    KeepOut                a polygon where no stake may stand
What must be known before issuing?
    Issue, Matter          sentences about the plan
    setback_clearance      distance to the property line, and what uses it up -> Setback
    close_dimensions       a string of dimensions against its overall -> Closed
    conflicts              the strings that do not close
What proves the stakes?
    rank_checks            sides and diagonals in the order they help -> RankedCheck
    diagonal_difference    what being out of square does to the diagonals

geometry.precision
==================
Precision: how well can a point be measured, and from where best?

What measures?
  TotalStation, Tape, StringLine, RightAngle, Level   one-sigma figures of each
  one_face            sigma of a direction in one face, from the two-face figure
What numbers set a point?
  setting_out, SettingOut   angle right from the backsight, distance
  azimuth             azimuth from one point to another
  cut_fill, CutFill, Grade, shown_cut_fill   cut or fill, and how it is labelled
How well is a point set?
  polar, Polar        by angle and distance from an occupied mark, control correlated
  free_station, FreeStation   predicted precision of a free station
  sighted, Placed     a point set or measured from it
  resected, Fix       the position of a free station that was measured
How sure is a height?
  trigonometric_height, HeightDifference   by slope distance and zenith angle
  curvature_refraction   what a level line of sight rises above the level surface
  level_run_variance, one_setup_variance   by spirit level
  combined_height, Combined   from several benchmarks, and whether they agree
How do satellite positions fit the site?
  localised, Localisation   shift and turn onto the control, residuals, alarms
  local_point, LocalPoint   a satellite position in local coordinates
  localised_heights, HeightFit, local_height   the same for heights
What is seen, and where to set up?
  obstacle, Obstacle, inside_any   what stands in the way
  clear, clear_lines  whether one line of sight, or each of many, is free
  seen_from, visibility   what is seen from many places
  best_setup, Setups, grid, finer   the best free station over many places
  best_occupied, Occupations   the best mark to occupy and the best backsight

geometry.ways
=============
Ways back: if a mark is lost, how is it put back, and what proves it?

What is there, what is lost, with what?
  Target, Survivor, Sort   the lost mark; what still stands, and what sort it is
  Tools, Limits       what the crew has; where a way begins to be weak
How is it put back?
  ways_back           every way, judged and ranked, refused ones with the reason
  Way, Kind, Number, Check, Caution, Refusal   a way and its parts
Did it come out right?
  judged, Outcome     measured check values against the expected ones
  differences, Differences, Shift   old stake, design and built work against each other
What errors do marks share?
  Lineage, Origin     where the errors of marks come from, joint covariance, generation
  control_origin, occupied_setup, free_setup, shot, put_back   origins of each kind
Where else could it stand?
  relocated, Place    whole offsets on the same line, outside the zones

geometry.survive
================
Survivability: before anything is lost, which loss would leave a mark nobody could
put back?

What stands, and what could put what back?
  stand, Stand        all marks of a job as arrays
  routes, Routes      which pairs of near marks could put each mark back
What would a loss mean?
  survivability, Survivability   single and double losses for every mark
  group_losses, GroupLoss   marks that die together: a haul road, a dig
  kill_sets           smallest losses that leave no way, for any list of ways
What to do about it?
  protect, Protection fewest marks to protect so that every mark keeps a way back
  best_extra, Extra   where one more mark would cure most

geometry.adjust
===============
Adjusting redundant measurements: where the points are, and what the residuals prove.

Adjust
- `adjust_network`: plane positions from distances, directions, angles, azimuths
- `adjust_levels`: heights from levelled rises

What was measured
- `Distance`, `Direction`, `Angle`, `Azimuth`, `HeightDifference`: one measurement
- `Coordinates`, `Heights`: known values with their joint covariance
- `coordinates`, `heights`: the same from one sigma or a full covariance
- `allow_for_centring`: sigmas widened by what centring adds

What comes back
- `NetworkAdjustment`, `LevelAdjustment`: everything about the adjusted network
- `PointReport`, `HeightReport`: one point
- `MeasurementReport`, `Measurements`: one measurement, all of them
- `KnownReport`: known values against the adjustment
- `GroupPrecision`: observed over given precision of one kind of measurement
- `GlobalTest`: the test of the whole

In words
- `say_adjustment`, `say_measurement`: sentences built from a result

When it cannot answer
- `Undetermined`: which points nothing holds and what would (`Loose`, `Missing`)
- `DoesNotSettle`: start coordinates too far from the measurements

Limits of tests
- `critical_w`: how large a standardised residual may be
- `noncentrality`, `detectable`: how large an error must be to be found
- `global_test`, `matching_alpha`: the whole, at a level that matches single tests
- `ellipse_factor`: confidence ellipses when sigma0 was estimated

geometry.moved
==============
Which mark moved, and how far: named when the measurements say so, a set when not.

Ask
- `which_moved`: recorded marks against new measurements in the plane
- `which_benchmark_moved`: recorded heights against new levels
- `compare_epochs`, `compare_level_epochs`: two epochs of measurements

What comes back
- `MovedAnswer`: verdict, reason, and everything below
- `MarkReport`: one mark: moved, one of several, not moved, seen in part, not tested
- `Move`: how far a named mark moved, with its covariance
- `Suspects`: one of these, and the measurement that would tell (`Tell`)
- `EpochAnswer`, `Displacement`: two epochs, relative to the marks that stand

In words
- `say_moved`, `say_mark`, `say_epochs`: sentences built from a result

Prepare
- `common_and_relative`, `common_and_relative_heights`: joint covariance of a record

geometry.decide
===============
Decisions: does it hold, how sure is that, and what could this check have seen?

Does it hold?
  decide              one number against its tolerance, simple or with a guard band
  decide_radial       a position against a circle of tolerance
  worst_uncertainty   the one uncertainty of a position that `decide_radial` takes
  Decision, Reason, Rule   the answer, its reason, and the rule used
  FACTOR_ONE_SIDED_95, WANTED_SHARE   the guard factor; the share of tolerance wanted
How sure is that, and what would settle it?
  conformance         probability that a number lies within its tolerance
  conformance_radial  the same for a position
  repeats, Repeats    how many measurements would settle an undecided one
What could this check have seen?
  smallest_seen       smallest move along one direction that one check finds
  smallest_move, SmallestMove   smallest move that several checks together find
  could_have_seen     whether a check would have found a given move
  noncentrality       lambda0 of a test, from its size and power
What is this check worth?
  independence, Independence, Means   grade 0 to 3, by what it does not share
  reach, Reach, Seen, Against, Component   shape, place, fit, height
  missing             reaches a tolerance class needs and no passed check has
Is the instrument as good as it should be?
  spread_agrees       a spread found against the one claimed
  spreads_agree       two spreads against each other
  is_zero, SpreadTest a zero error against nothing; the answer of all three
  position_factor     confidence ellipse over standard ellipse, sigma known or estimated
  accuracy_horizontal radial 95 % accuracy from two root-mean-square errors
How large may a difference be?
  growing, rooted, fixed_and_ppm   tolerances that grow with a length
How is it shown?
  shown               digits by one rule that every language gives alike
  shown_apart         value and limit with enough digits to tell which is larger

geometry.match
==============
Matching: which shot is which mark, and do number and place agree.

Which planned mark is this shot?
    match_shots       many shots by number and place -> Matches of Status
    nearest_marks     by place alone -> Nearest
    Status, sentence  what a shot turned out to be, as a sentence
Do the numbers mean what they say?
    normal_number     case, spaces and punctuation aside
    look_alike        leading zeros and letters read as digits aside
    collisions        planned numbers that normalising would merge -> Collision
    number_index      planned numbers ready to be asked -> NumberIndex
    number_shift      numbers that run ahead or behind -> NumberShift
How does one set of points lie on another?
    fit_similarity    shift, rotation, scale with outliers set aside -> Similarity

geometry.signature
==================
Signatures: why shots lie off the design as they do, and what would tell.

What is wrong with this setup's work?
    setup             a setup with its precision and its Role -> Setup
    signature         plane residuals: every cause weighed -> Signature
    height_signature  height residuals likewise -> Signature
    nearest_revision  an older plan fits better -> RevisionReading
    grid_for_ground, known_field  causes whose field is known -> Hypothesis
    Kind, GROSS       the causes, and which of them are gross
    Cause, NextShot   what an answer is made of
What is wrong with this one stake?
    explain_stake     wrong side, other offset, station, digits -> StakeReading
    explain_height    round step, reference, sign, digits -> StakeReading
    Line, Hint, Slip  a line it refers to, one explanation, its name
    slips             copies of a number with a digit wrong -> DigitSlip
    divisible_by_nine the hint of exchanged digits
In which words?
    Words             unit and digits of sentences; METRES, FEET, US_SURVEY_FEET
"""

from __future__ import annotations
