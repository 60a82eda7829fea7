module CycleSim.Studies.Tests.HealthTests

open System
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)
let private ground = FlightCondition.AtIsaOffset(0.0, 0.0, 5.0)
let private held = Limit(Quantity.N1, 0.97)

let private measured = [| Quantity.T45; Quantity.FuelFlow; Quantity.N2; Quantity.P3; Quantity.T3 |]

/// Shifts that a worn engine shows, found by solving it: the readings of a test without scatter.
let private readingsOf (worn: WornPart list) =
    let point parts =
        let flight = ground
        let inputs = model.Value.Inputs &flight
        Wear.Apply(model.Value.Engine, List.toArray parts, inputs)
        model.Value.At(&flight, held.Quantity, held.Value, inputs)

    let fresh, tired = point [], point worn

    measured
    |> Array.map (fun q -> {
        Quantity = q
        Shift = tired.Value q - fresh.Value q
        Sigma = 0.003 * fresh.Value q
    })

let private part name change : WornPart = { Name = name; Change = change }

let private diagnose readings (causes: string list) prior =
    HealthDiagnosis.Run(model.Value, ground, held, readings, List.toArray causes, prior)

let private number low high =
    Gen.choose (0, 1000000) |> Gen.map (fun n -> low + (high - low) * float n / 1e6)

[<Tests>]
let tests =
    testSequenced
    <| testList "health" [
        testCase "planted wear of two parts is found again by the full model" (fun () ->
            let property =
                Prop.forAll (Arb.fromGen (Gen.zip (number -0.04 0.0) (number -0.03 0.03))) (fun (efficiency, flow) ->
                    let result =
                        diagnose
                            (readingsOf [ part "hpt efficiency" efficiency; part "hpc flow" flow ])
                            [ "hpt efficiency"; "hpc flow" ]
                            0.0

                    abs (result.Estimates[0].Full - efficiency) < 1e-6
                    && abs (result.Estimates[1].Full - flow) < 1e-6
                    && result.ChiSquare < 1e-6)

            Check.One(Config.QuickThrowOnFailure.WithMaxTest 15, property))

        testCase "a single worn part leads the ranking, with its change" (fun () ->
            for name, change in [ "hpt efficiency", -0.02; "lpt flow", 0.015; "fan efficiency", -0.02 ] do
                let best = (diagnose (readingsOf [ part name change ]) [] 0.0).Singles[0]
                Expect.equal best.Name name "the part"
                Expect.floatClose Accuracy.medium best.Change change "the change"
                Expect.isLessThan best.ChiSquare 1e-6 "explains all")

        testCase "the unit in which scatter is counted does not matter" (fun () ->
            let readings = readingsOf [ part "hpt efficiency" -0.02; part "lpt flow" 0.01 ]

            let noisy =
                readings
                |> Array.mapi (fun i r -> {
                    r with
                        Shift = r.Shift + r.Sigma * float (i % 3 - 1)
                })

            let twice = noisy |> Array.map (fun r -> { r with Sigma = 2.0 * r.Sigma })
            let causes = [ "hpt efficiency"; "lpt flow" ]
            let a, b = diagnose noisy causes 0.0, diagnose twice causes 0.0

            for k in 0..1 do
                Expect.floatClose Accuracy.medium a.Estimates[k].Full b.Estimates[k].Full "same estimate"

                Expect.floatClose
                    Accuracy.medium
                    b.Estimates[k].StandardDeviation
                    (2.0 * a.Estimates[k].StandardDeviation)
                    "twice the scatter"

            Expect.floatClose Accuracy.medium a.ChiSquare (4.0 * b.ChiSquare) "chi-square")

        testCase "what the readings cannot tell apart is said" (fun () ->
            // Two readings, and parts that act on the same spool.
            let readings = readingsOf [ part "hpt efficiency" -0.02 ] |> Array.take 2
            let result = diagnose readings [ "hpt efficiency"; "hpc efficiency" ] 0.0
            Expect.isNonEmpty result.Alike "alike"

            Expect.isTrue
                (result.Remarks
                 |> Seq.exists (fun r -> r.Contains "cannot tell one from the other"))
                "in words"

            Expect.isTrue (result.Remarks |> Seq.exists _.Contains("hang together")) "estimates too")

        testCase "a prior holds back what the readings do not show, and allows more causes than readings" (fun () ->
            let readings = readingsOf [ part "hpt efficiency" -0.02 ] |> Array.take 2
            let causes = [ "hpt efficiency"; "hpc efficiency"; "lpt efficiency"; "fan efficiency" ]
            let result = diagnose readings causes 0.01
            Expect.equal result.Estimates.Count 4 "four causes"

            for estimate in result.Estimates do
                Expect.isLessThan estimate.StandardDeviation (0.01 + 1e-9) "never less sure than before"

            Expect.throwsC (fun () -> diagnose readings causes 0.0 |> ignore) (fun error ->
                Expect.stringContains error.Message "4 causes and 2 readings" "refused without"))

        testCase "a fit that leads beyond any wear is no answer, and it is said" (fun () ->
            // A core speed far down beside little else: no mixture of efficiencies does that.
            let flight = ground
            let expected = model.Value.At(&flight, held.Quantity, held.Value)

            let shifted quantity share sigma = {
                Quantity = quantity
                Shift = share * expected.Value quantity
                Sigma = sigma * expected.Value quantity
            }

            let readings = [|
                shifted Quantity.T45 0.011 0.0027
                shifted Quantity.FuelFlow 0.011 0.005
                shifted Quantity.N2 -0.02 0.001
            |]

            let result =
                diagnose readings [ "hpt efficiency"; "hpc efficiency"; "lpt efficiency" ] 0.0

            Expect.isEmpty result.Estimates "no estimates"
            Expect.isTrue (Double.IsNaN result.ChiSquare) "no chi-square"

            Expect.isTrue
                (result.Remarks
                 |> Seq.exists _.Contains("the parts named are not fitted together"))
                "in words"

            // Every cause alone is ranked, and explains no less than nothing wrong does.
            Expect.equal result.Singles.Count (Wear.Parts model.Value.Engine).Count "all parts"

            for single in result.Singles do
                Expect.isLessThanOrEqual single.ChiSquare (result.ChiSquareOfNothing + 1e-9) single.Name)

        testCase "with a prior, what it is missed by counts in chi-square" (fun () ->
            let prior = 0.002

            let result =
                diagnose (readingsOf [ part "hpt efficiency" -0.03 ]) [ "hpt efficiency"; "lpt flow" ] prior

            let ofReadings = result.Readings |> Seq.sumBy (fun r -> r.Miss * r.Miss)
            let ofPrior = result.Estimates |> Seq.sumBy (fun e -> (e.Full / prior) ** 2.0)
            Expect.isGreaterThan ofPrior 1.0 "a prior that matters"
            Expect.floatClose Accuracy.high result.ChiSquare (ofReadings + ofPrior) "both")

        testCase "changes count from the engine as it was, worn or not" (fun () ->
            let input = Wear.Input(model.Value.Engine, "hpt efficiency")
            let change = -1e-4

            let point factor =
                let flight = ground
                let inputs = model.Value.Inputs &flight
                inputs[input] <- factor
                model.Value.At(&flight, held.Quantity, held.Value, inputs)

            let before, after = point 0.92, point (0.92 * (1.0 + change))

            let readings =
                measured
                |> Array.map (fun q -> {
                    Quantity = q
                    Shift = after.Value q - before.Value q
                    Sigma = 0.003 * before.Value q
                })

            let result =
                HealthDiagnosis.Run(
                    model.Value,
                    ground,
                    held,
                    readings,
                    [| "hpt efficiency" |],
                    loads = (fun inputs -> inputs[input] <- 0.92)
                )

            // So small a change is linear: the Jacobian alone finds it.
            Expect.floatClose { absolute = 0.0; relative = 2e-3 } result.Estimates[0].Linear change "first order"
            Expect.floatClose { absolute = 0.0; relative = 1e-4 } result.Estimates[0].Full change "full")

        testCase "questions that make no sense are refused" (fun () ->
            let refuse readings causes (says: string) =
                Expect.throwsC (fun () -> diagnose readings causes 0.0 |> ignore) (fun error ->
                    Expect.isTrue (error :? WearException) "kind"
                    Expect.stringContains error.Message says says)

            let one = readingsOf [ part "hpt efficiency" -0.02 ] |> Array.take 1
            refuse [||] [] "no readings"
            refuse [| { one[0] with Sigma = 0.0 } |] [] "standard deviation"
            refuse [| one[0]; one[0] |] [] "given twice"
            refuse [| { one[0] with Quantity = Quantity.N1 } |] [] "held as the power setting"
            refuse [| { one[0] with Quantity = Quantity.N3 } |] [] "no spool"
            refuse one [ "hp turbine" ] "not a part"
            refuse one [ "hpt flow"; "hpt flow" ] "given twice")

        testCase "EGT margin: shares, their sum, and the temperature at which nothing is left" (fun () ->
            let worn = [| part "hpt efficiency" -0.02; part "hpc efficiency" -0.01 |]
            let result = EgtMargin.Run(model.Value, "take-off", 0.0<m>, 0.0, worn, 1260.0<K>)
            Expect.floatClose Accuracy.high (float result.New.NetThrust) (float result.Thrust) "thrust held"
            Expect.floatClose Accuracy.high (float result.Worn.NetThrust) (float result.Thrust) "thrust held"
            Expect.isLessThan result.WornMargin result.NewMargin "wear costs margin"

            for share in result.Shares do
                // Two per cent of wear are nearly, not quite, linear.
                Expect.floatClose
                    { absolute = 0.0; relative = 0.08 }
                    (float share.Alone)
                    (float share.FirstOrder)
                    share.Part.Name

            // Common practice, no source: one per cent of high-pressure turbine efficiency costs some 5 to 20 K.
            let hpt = -(float result.Shares[0].FirstOrder) / 2.0
            Expect.isGreaterThan hpt 5.0 "K per per cent"
            Expect.isLessThan hpt 20.0 "K per per cent"

            // At that temperature the margin is nothing, with the same thrust.
            let flight = FlightCondition.AtTemperature(0.0, 0.0, float result.WornOutsideLimit)
            let inputs = model.Value.Inputs &flight
            Wear.Apply(model.Value.Engine, worn, inputs)
            let there = model.Value.At(&flight, Quantity.NetThrust, float result.Thrust, inputs)
            Expect.floatClose Accuracy.high there.T45 1260.0 "on the limit")

        testCase "without a limit on EGT there is no margin to give" (fun () ->
            Expect.throwsC
                (fun () -> EgtMargin.Run(model.Value, "take-off", 0.0<m>, 0.0, [||]) |> ignore)
                (fun error -> Expect.stringContains error.Message "no limit on T45" "message"))
    ]
