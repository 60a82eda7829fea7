module CycleSim.Studies.Tests.StudiesTests

open System
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

// One model for all: studies do not change it.
let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private number low high =
    Gen.choose (0, 1000000) |> Gen.map (fun n -> low + (high - low) * float n / 1e6)

/// An airport: altitude, Mach number up to lift-off, relative humidity, customer bleed.
type Airport = {
    Altitude: float
    Mach: float
    Humidity: float
    Bleed: float
}

let private airports =
    gen {
        let! altitude = number -300.0 3500.0
        let! mach = number 0.0 0.25
        let! humidity = number 0.0 1.0
        let! bleed = number 0.0 0.05

        return {
            Altitude = altitude
            Mach = mach
            Humidity = humidity
            Bleed = bleed
        }
    }
    |> Arb.fromGen


let private holds name property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest 60, Prop.forAll airports property))

let private bleedPort =
    lazy
        (model.Value.Engine.Ports
         |> Array.findIndex (fun p -> p.Port.Name = "customer-bleed"))

let private run airport =
    let loads =
        Action<float[]>(fun inputs -> inputs[model.Value.Layout.PortFraction bleedPort.Value] <- airport.Bleed)

    FlatRating.Run(
        model.Value,
        "take-off",
        airport.Altitude * 1.0<m>,
        airport.Mach,
        relativeHumidity = airport.Humidity,
        loads = loads
    )

let private solved (result: FlatRatingResult) =
    result.Rows
    |> Seq.choose (fun row ->
        match row.Point with
        | null -> None
        | point -> Some(row, point))
    |> Seq.toList

[<Tests>]
// An engine model serves one thread, so the tests that share it take turns.
let tests =
    testSequenced
    <| testList "studies" [
        holds "thrust is flat up to the break and falls beyond it" (fun airport ->
            let result = run airport

            solved result
            |> List.pairwise
            |> List.forall (fun ((a, p), (b, q)) ->
                if b.OutsideTemperature < result.BreakTemperature then
                    abs (q.NetThrust / float result.FlatThrust - 1.0) < 1e-8
                else
                    q.NetThrust < p.NetThrust * (1.0 + 1e-9)))

        holds "no row exceeds a limit" (fun airport ->
            let result = run airport

            solved result
            |> List.forall (fun (_, point) ->
                result.Limits
                |> Seq.forall (fun limit ->
                    let value =
                        match limit.Quantity with
                        | Quantity.T41 -> point.T41
                        | Quantity.N1 -> point.Spools[0].RelativeSpeed
                        | Quantity.N2 -> point.Spools[1].RelativeSpeed
                        | other -> failwith $"the test does not know {other}"

                    value <= limit.Value * (1.0 + 1e-9))))

        holds "bleed never raises the break and never changes the flat thrust" (fun airport ->
            let without = run { airport with Bleed = 0.0 }
            let result = run airport

            result.BreakTemperature <= without.BreakTemperature + 1e-6<K>
            && abs (result.FlatThrust / without.FlatThrust - 1.0) < 1e-9)

        testCase "without loads, in dry air, the break is the definition's" (fun () ->
            let result = FlatRating.Run(model.Value, "take-off", 1500.0<m>, 0.0)
            Expect.floatClose Accuracy.high (float result.BreakIsaOffset) 15.0 "ISA + 15 K in the definition"
            Expect.isTrue (result.BreakResidual <= 1e-10) "solved")

        testCase "margin budgets add up" (fun () ->
            // 2, 3 and 5 % systematic, 3 and 4 % random: 10 % and the root of 9 + 16, 5 %, by hand.
            let allowance name size isRandom = {
                Name = name
                Allowance = size
                Random = isRandom
            }

            let required =
                SurgeSurvey.Required [|
                    allowance "a" 0.02 false
                    allowance "b" 0.03 false
                    allowance "c" 0.05 false
                    allowance "d" 0.03 true
                    allowance "e" 0.04 true
                |]

            Expect.floatClose Accuracy.high required 0.15 "sum and root of the sum of squares")

        testCase "a less efficient compressor has less margin to spare" (fun () ->
            let worn =
                Action<float[]>(fun inputs -> inputs[model.Value.Layout.CompressorEfficiency 2] <- 0.96)

            let budget (result: SurgeSurveyResult) =
                result.Budgets |> Seq.find (fun b -> b.Compressor = "hpc")

            let fresh = budget (SurgeSurvey.Run(model.Value, "take-off"))
            let tired = budget (SurgeSurvey.Run(model.Value, "take-off", loads = worn))
            Expect.isLessThan tired.Slack fresh.Slack "slack of the high-pressure compressor")

        testCase "a survey stops when it is told to" (fun () ->
            use source = new Threading.CancellationTokenSource()
            source.Cancel()

            Expect.throwsT<OperationCanceledException>
                (fun () -> SurgeSurvey.Run(model.Value, "take-off", cancellation = source.Token) |> ignore)
                "cancelled")

        testCase "a rating that is not there is named with those that are" (fun () ->
            Expect.throwsC (fun () -> FlatRating.Run(model.Value, "climb", 0.0<m>, 0.0) |> ignore) (fun error ->
                Expect.stringContains error.Message "it has 'take-off'" "message"))
    ]
