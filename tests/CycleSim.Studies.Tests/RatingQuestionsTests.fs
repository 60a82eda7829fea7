module CycleSim.Studies.Tests.RatingQuestionsTests

open System
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private number low high =
    Gen.choose (0, 1000000) |> Gen.map (fun n -> low + (high - low) * float n / 1e6)

/// A hot airport and a share of the flat thrust there.
type HotDay = {
    Altitude: float
    Mach: float
    Hotter: float
    Share: float
}

let private hotDays =
    gen {
        let! altitude = number 0.0 3000.0
        let! mach = number 0.0 0.25
        let! hotter = number 5.0 25.0
        let! share = number 0.93 1.0

        return {
            Altitude = altitude
            Mach = mach
            Hotter = hotter
            Share = share
        }
    }
    |> Arb.fromGen

let private holds name property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest 30, Prop.forAll hotDays property))

let private required day =
    let rating = model.Value.Rating "take-off"
    let outside = StandardAtmosphere.Temperature day.Altitude + 15.0 + day.Hotter

    let result =
        RatingQuestions.Required(
            model.Value,
            "take-off",
            day.Altitude * 1.0<m>,
            day.Mach,
            outside * 1.0<K>,
            rating.FlatThrust(day.Altitude, day.Mach) * day.Share * 1.0<N>
        )

    result, FlightCondition.AtTemperature(day.Altitude, day.Mach, outside)

let private ratingWith (limits: Limit seq) (thrust: float) (flatTo: float) =
    Rating(
        model.Value.Engine,
        RatingDefinition(Name = "amended", Thrust = thrust, FlatTo = flatTo, Limits = Array.ofSeq limits)
    )

[<Tests>]
let tests =
    testSequenced
    <| testList "rating questions" [
        holds "with its limits raised as said, the rating gives the wanted thrust" (fun day ->
            let result, flight = required day

            let raised =
                result.Limits
                |> Seq.map (fun l -> Limit(l.Limit.Quantity, max l.Limit.Value l.Needed))

            let thrustOf (rating: Rating) =
                model.Value.AtRating(&flight, rating).NetThrust

            let gives (rating: Rating) =
                let ratio = thrustOf rating / float result.Wanted
                // Where no limit has to be raised there may be more.
                ratio > 1.0 - 1e-6
                && (ratio < 1.0 + 1e-6 || result.Limits |> Seq.forall (fun l -> not l.Exceeded))

            // The same flat thrust at sea level up to a hotter day, and more of it up to the day of now.
            let sameThrust = ratingWith raised (float result.SeaLevelThrustNow) nan
            let sameDay = ratingWith raised 0.0 (float result.FlatToNow)

            let asSaid =
                if Double.IsNaN(float result.FlatToNeeded) then
                    thrustOf sameThrust < float result.Wanted && result.FlatToReason <> ""
                else
                    gives sameThrust && abs (sameThrust.FlatTo - float result.FlatToNeeded) < 1e-6

            asSaid
            && gives sameDay
            && abs (sameDay.FlatThrust(0.0, 0.0) / float result.SeaLevelThrustNeeded - 1.0) < 1e-8)

        testCase "flat to the temperature said, the rating gives the wanted thrust" (fun () ->
            let flight = FlightCondition.AtTemperature(1829.0, 0.0, 311.15)

            let result =
                RatingQuestions.Required(model.Value, "take-off", 1829.0<m>, 0.0, 311.15<K>, 95e3<N>)

            let speeds =
                result.Limits
                |> Seq.map _.Limit
                |> Seq.filter (fun l -> l.Quantity = Quantity.N1 || l.Quantity = Quantity.N2)

            let amended =
                ratingWith speeds (float result.SeaLevelThrustNow) (float result.FlatToNeeded)

            Expect.floatClose Accuracy.medium (model.Value.AtRating(&flight, amended).NetThrust) 95e3 "wanted")

        holds "at the hottest temperature said, the rating gives the wanted thrust and no more" (fun day ->
            let result, _ = required day

            let hottest =
                FlightCondition.AtTemperature(day.Altitude, day.Mach, float result.HottestNow)

            let point = model.Value.AtRating(&hottest, model.Value.Rating "take-off")
            abs (point.NetThrust / float result.Wanted - 1.0) < 1e-8)

        holds "the break is where a dense sweep finds the crossing" (fun day ->
            let result =
                FlatRating.Run(model.Value, "take-off", day.Altitude * 1.0<m>, day.Mach, [||])

            let rating = model.Value.Rating "take-off"

            // Thrust that the limits alone allow, swept until it falls below the flat thrust: by 1 K, then ten times finer.
            let limited (temperature: float) =
                let flight = FlightCondition.AtTemperature(day.Altitude, day.Mach, temperature)
                let matcher = Matcher model.Value.Engine
                (model.Value.Inputs &flight).CopyTo(matcher.Inputs, 0)

                if not (matcher.Solve(MatchingProblem.FirstLimit(ReadOnlySpan(Array.ofSeq rating.Limits)))).Solved then
                    failwith $"no point at {temperature} K"

                matcher.Path.NetThrust.Value

            let rec sweep from step =
                let next = from + step

                if limited next > float result.FlatThrust then
                    sweep next step
                elif step > 0.0005 then
                    sweep from (step / 10.0)
                else
                    from

            let crossing = sweep (StandardAtmosphere.Temperature day.Altitude + 4.3) 1.0

            abs (crossing - float result.BreakTemperature) < 0.001)

        testCase "finding the break costs no more than three ordinary points" (fun () ->
            // Passes with and without derivatives are what a solution costs.
            let cost (outcome: MatchOutcome) = outcome.Jacobians + outcome.Passes
            let rating = model.Value.Rating "take-off"

            for altitude in [ 0.0; 800.0; 1600.0; 2400.0 ] do
                for mach in [ 0.0; 0.1; 0.25 ] do
                    let flat = rating.FlatThrust(altitude, mach)
                    let flight = FlightCondition.AtIsaOffset(altitude, mach, 15.0)
                    let inputs = model.Value.Inputs &flight
                    let mutable outside = 0.0
                    let mutable governing = 0
                    let found = rating.Break(inputs, flat, &outside, &governing)
                    let ordinary = model.Value.At(&flight, Quantity.NetThrust, flat, inputs).Outcome
                    Expect.isTrue found.Solved "the break"
                    Expect.isLessThanOrEqual (cost found) (3 * cost ordinary) $"{altitude} m, Mach {mach}")

        // Typical figures quoted for turbofans, 0.7 to 1.0 % of thrust per kelvin, common practice, no source.
        for engine in [ "velda-27"; "torvik-75"; "lunde-14g"; "pelda-4m"; "sonde-12" ] do
            testCase $"take-off thrust of {engine} lapses as the trade expects" (fun () ->
                let turbofan = EngineModel((EngineLibrary.Load engine).Engine)
                let result = FlatRating.Run(turbofan, "take-off", 0.0<m>, 0.0, [||])
                Expect.isGreaterThan (float result.LapsePerKelvin) 0.007 "at least 0.7 %/K"
                Expect.isLessThan (float result.LapsePerKelvin) 0.010 "at most 1.0 %/K")

        testCase "effects on the break: bleed and power bring it down, none leaves it" (fun () ->
            let effects = RatingQuestions.BreakEffects(model.Value, "take-off", 0.0<m>, 0.0)
            let plain = effects[0]
            Expect.equal (float plain.Shift) 0.0 "nothing changed"

            for effect in effects do
                if effect.Load.Contains "flow" || effect.Load.Contains "kW" then
                    Expect.isLessThan (float effect.Shift) 0.0 effect.Load
                    Expect.isLessThan (float effect.ThrustThere) (float plain.ThrustThere) effect.Load)

        testCase "a map keeps the places without a point, with their reason" (fun () ->
            let map =
                RatingQuestions.Map(model.Value, "take-off", [| 0.0<m>; 20000.0<m> |], [| 0.0 |])

            Expect.equal map.Points[0].Reason "" "sea level"
            Expect.isTrue (map.Points[1].Reason <> "" || float map.Points[1].FlatThrust > 0.0) "a point or a reason"
            Expect.equal (map.Table([||]).Rows) 2 "both rows")

        testCase "a thrust that is never reached is refused with the reason" (fun () ->
            Expect.throwsC
                (fun () ->
                    RatingQuestions.Required(model.Value, "take-off", 0.0<m>, 0.0, 300.0<K>, 900e3<N>)
                    |> ignore)
                (fun error -> Expect.stringContains error.Message "cannot be reached" "message"))

        testCase "a map of nothing is refused" (fun () ->
            Expect.throwsT<ArgumentException>
                (fun () -> RatingQuestions.Map(model.Value, "take-off", [||], [| 0.0 |]) |> ignore)
                "no altitude")
    ]
