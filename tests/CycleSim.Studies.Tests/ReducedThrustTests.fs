module CycleSim.Studies.Tests.ReducedThrustTests

open System
open System.IO
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

/// A runway: flight condition, derate, wanted reduction, bleed.
type Runway = {
    Flight: FlightCondition
    Derate: float
    Reduction: float
    Bleed: float
}

let private runways =
    gen {
        let! altitude = number -300.0 3000.0
        let! mach = number 0.0 0.2
        let! isa = number -30.0 30.0
        let! derated = Gen.elements [ false; true ]
        let! derate = number 0.02 0.2
        let! reduction = number 0.01 0.15
        let! bleed = number 0.0 0.02

        return {
            Flight = FlightCondition.AtIsaOffset(altitude, mach, isa)
            Derate = if derated then derate else 0.0
            Reduction = reduction
            Bleed = bleed
        }
    }
    |> Arb.fromGen

let private holds name property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest 40, Prop.forAll runways property))

let private taken (runway: Runway) =
    let port =
        model.Value.Engine.Ports
        |> Array.findIndex (fun p -> p.Port.Name = "customer-bleed")

    Action<float[]>(fun inputs -> inputs[model.Value.Layout.PortFraction port] <- runway.Bleed)

let private reduced (runway: Runway) =
    ReducedThrust.ForReduction(model.Value, "take-off", runway.Flight, runway.Reduction, runway.Derate, taken runway)

let private seaLevel = FlightCondition.AtIsaOffset(0.0, 0.0, 5.0)

/// Constant specific heats, no power taken: similarity is exact.
let private similar =
    lazy
        (let text =
            (EngineLibrary.Text "velda-27")
                .Replace(
                    "model = \"thermally perfect\"",
                    "model = \"constant\"\nair_cp = \"1005 J/(kg K)\"\nair_gamma = 1.4\nburnt_cp = \"1148 J/(kg K)\"\nburnt_gamma = 1.333"
                )
                .Replace("power_offtake = \"80 kW\"", "power_offtake = \"0 kW\"")

         let path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".toml")

         try
             File.WriteAllText(path, text)
             EngineModel((EngineLibrary.Load path).Engine)
         finally
             File.Delete path)

[<Tests>]
let tests =
    testSequenced
    <| testList "reduced thrust" [
        holds "from thrust to assumed temperature and back" (fun runway ->
            let wanted = reduced runway
            let setting = wanted.Settings[0]
            let thrust = (1.0 - runway.Reduction) * wanted.Basis.NetThrust

            let back =
                ReducedThrust.ForAssumedTemperature(
                    model.Value,
                    "take-off",
                    runway.Flight,
                    setting.AssumedTemperature,
                    runway.Derate,
                    taken runway
                )

            abs (float setting.NetThrust / thrust - 1.0) < 1e-9
            && abs (float back.Settings[0].NetThrust / thrust - 1.0) < 1e-9
            && abs (setting.ReductionFromBasis - runway.Reduction) < 1e-9)

        holds
            "the setting gives the thrust at the outside temperature, with everything below the full rating"
            (fun runway ->
                let result = reduced runway
                let full, set = result.Rated, result.Settings[0].Setting

                set.Flight.StaticTemperature = runway.Flight.StaticTemperature
                && abs (set.NetThrust / float result.Settings[0].NetThrust - 1.0) < 1e-9
                && set.T41 < full.T41
                && set.T45 < full.T45
                && set.FuelFlow < full.FuelFlow
                && Seq.forall2
                    (fun (a: SpoolReport) (b: SpoolReport) -> a.RelativeSpeed < b.RelativeSpeed)
                    set.Spools
                    full.Spools)

        holds "the assumed temperature lies above the outside temperature and the break" (fun runway ->
            let result = reduced runway
            let assumed = result.Settings[0].AssumedTemperature

            assumed > runway.Flight.StaticTemperature * 1.0<K>
            && assumed > result.BreakTemperature)

        holds "a derate takes its share off at every assumed temperature" (fun runway ->
            let result = reduced runway
            let setting = result.Settings[0]
            let kept = 1.0 - runway.Derate

            abs (result.Basis.NetThrust / result.Rated.NetThrust - kept) < 1e-9
            && abs ((1.0 - setting.ReductionFromRated) - kept * (1.0 - setting.ReductionFromBasis)) < 1e-9)

        holds "no setting lies more than a quarter below its basis, and a schedule falls to the largest" (fun runway ->
            let result =
                ReducedThrust.Schedule(model.Value, "take-off", runway.Flight, 5.0<K>, runway.Derate, taken runway)

            let thrusts = result.Settings |> Seq.map (fun s -> float s.NetThrust) |> Seq.toList

            List.pairwise (result.Basis.NetThrust :: thrusts)
            |> List.forall (fun (a, b) -> b < a)
            && result.Settings |> Seq.forall (fun s -> s.ReductionFromBasis <= 0.25 + 1e-9)
            && result.Largest.AssumedTemperature = (Seq.last result.Settings).AssumedTemperature)

        holds
            "N1 converted by the root of the inlet temperatures is the speed at the same corrected speed"
            (fun runway ->
                let setting = (reduced runway).Settings[0]

                let inlet (point: OperatingPoint) = point.Station("2").TotalTemperature
                let root = Math.Sqrt(inlet setting.SameCorrectedSpeed / inlet setting.AtAssumed)
                let converted = setting.AtAssumed.Spools[0].RelativeSpeed * root
                abs (setting.SameCorrectedSpeed.Spools[0].RelativeSpeed / converted - 1.0) < 1e-9)

        // Similarity (dimensional analysis, any textbook of gas turbines): with constant specific heats and no power
        // taken, corrected speed fixes corrected thrust, whatever the temperature.
        testCase "with constant specific heats and no power taken both conversions are one" (fun () ->
            let result = ReducedThrust.ForReduction(similar.Value, "take-off", seaLevel, 0.15)

            Expect.isLessThan (abs result.Settings[0].ConversionExcess) 1e-8 "excess")

        // Air of real specific heats; the difference is of the order of a tenth of a per cent.
        testCase "with real gas the conversions differ a little" (fun () ->
            let excess =
                (ReducedThrust.ForReduction(model.Value, "take-off", seaLevel, 0.15)).Settings[0].ConversionExcess

            Expect.isTrue (abs excess > 1e-5 && abs excess < 0.01) $"{excess}")

        testCase "the largest reduction is a quarter where temperatures allow it" (fun () ->
            let result = ReducedThrust.ForReduction(model.Value, "take-off", seaLevel, 0.25)

            Expect.floatClose Accuracy.high (float result.Settings[0].NetThrust) 90e3 "a quarter below 120 kN"

            Expect.floatClose
                Accuracy.high
                (float result.Largest.AssumedTemperature)
                (float result.Settings[0].AssumedTemperature)
                "temperature")

        testCase "where temperatures end first, that is what ends it" (fun () ->
            // At the hottest outside temperature a quarter less needs more than 340 K.
            let result =
                ReducedThrust.Schedule(model.Value, "take-off", FlightCondition.AtIsaOffset(0.0, 0.0, 35.0), 5.0<K>)

            Expect.equal result.Largest.AssumedTemperature 340.0<K> "temperature"
            Expect.stringContains result.LargestEndedBy "highest temperature" "reason"
            Expect.isLessThan result.Largest.ReductionFromBasis 0.25 "reduction")

        testCase "impossible questions are answered with the reason and the largest reduction" (fun () ->
            let refused (ask: unit -> ReducedThrustResult) (words: string) =
                Expect.throwsC (fun () -> ask () |> ignore) (fun error ->
                    Expect.isTrue (error :? NoSolutionException) $"{error.GetType()}"
                    Expect.stringContains error.Message "No setting" "no setting"
                    Expect.stringContains error.Message words "reason"

                    Expect.stringContains
                        error.Message
                        "largest reduction allowed here is 25.00 %, to 90.00 kN"
                        "largest"

                    Expect.stringContains error.Message "338" "its assumed temperature")

            let thrust value () =
                ReducedThrust.ForThrust(model.Value, "take-off", seaLevel, value)

            let assumed value () =
                ReducedThrust.ForAssumedTemperature(model.Value, "take-off", seaLevel, value)

            refused (thrust 130e3<N>) "more than the rating gives"
            refused (thrust 120e3<N>) "nothing is reduced"
            refused (thrust 80e3<N>) "not allowed under AC 25-13"
            refused (thrust -1.0<N>) "above zero"
            refused (thrust (nan * 1.0<N>)) "above zero"
            refused (assumed 290.0<K>) "not above the outside temperature"
            refused (assumed 300.0<K>) "flat up to 303.2 K"
            refused (assumed 339.9<K>) "not allowed under AC 25-13"
            refused (assumed 350.0<K>) "end at 340.0 K"
            refused (assumed (nan * 1.0<K>)) "not above")

        testCase "a derate is a share, and a rating one of the definition's" (fun () ->
            Expect.throwsT<ArgumentOutOfRangeException>
                (fun () ->
                    ReducedThrust.ForReduction(model.Value, "take-off", seaLevel, 0.1, 1.0)
                    |> ignore)
                "derate"

            Expect.throwsT<RatingException>
                (fun () -> ReducedThrust.ForReduction(model.Value, "cruise", seaLevel, 0.1) |> ignore)
                "rating")

        testCase "the table has the full rating, the derate and the settings" (fun () ->
            let result =
                ReducedThrust.ForReduction(model.Value, "take-off", seaLevel, 0.1, 0.05)

            let table = result.Table [||]
            Expect.equal (table.Column("kind").Texts) [| "rated"; "derated"; "assumed temperature" |] "rows"

            Expect.floatClose
                Accuracy.high
                (table.Column("net_thrust_N").Numbers[2])
                (float result.Settings[0].NetThrust)
                "thrust")
    ]
