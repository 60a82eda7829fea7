namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Reports
open MathNet.Numerics.LinearAlgebra

/// A reading's shift from what the engine should show, the power setting held.
type Reading = {
    Quantity: Quantity
    /// SI; speeds over their design value.
    Shift: float
    /// Standard deviation of the shift, SI, above 0.
    Sigma: float
}

/// One cause alone, fitted to all readings.
type SingleCause = {
    Name: string
    /// Change that fits best, as a share, by the full model.
    Change: float
    StandardDeviation: float
    /// Sum of the squared misses over their standard deviations that it leaves.
    ChiSquare: float
}

/// One of several causes fitted together.
type CauseEstimate = {
    Name: string
    /// By the exact Jacobian alone, and by the full model.
    Linear: float
    Full: float
    /// From the readings' (and priors') standard deviations.
    StandardDeviation: float
}

/// Two causes that look alike in these readings.
type AlikeCauses = {
    First: string
    Second: string
    /// Cosine between their signatures, weighted: 1 or -1 is one and the same direction.
    Cosine: float
}

/// A reading, what the fitted causes make of it, and the miss.
type ExplainedReading = {
    Reading: Reading
    Explained: float
    /// Miss over the standard deviation.
    Miss: float
}

/// Causes fitted by the full model.
type private Fit = {
    First: float[]
    Changes: float[]
    Values: float[]
    Covariance: Matrix<float>
    Misses: float[]
    /// What a full step takes off chi-square where all is linear.
    Promised: float
}

/// Which component changes explain a shift of readings.
type DiagnosisResult = {
    Engine: string
    Held: Limit
    /// The point as it should be.
    Expected: OperatingPoint
    /// Every single cause, the best first.
    Singles: IReadOnlyList<SingleCause>
    /// The causes fitted together; empty where none was asked for.
    Estimates: IReadOnlyList<CauseEstimate>
    Readings: IReadOnlyList<ExplainedReading>
    /// Of the causes fitted together, what a prior is missed by counted in; NaN where none was.
    ChiSquare: float
    /// Readings (and priors) less causes.
    DegreesOfFreedom: int
    /// Chi-square of the readings with nothing wrong.
    ChiSquareOfNothing: float
    /// Pairs that these readings cannot tell apart, or hardly.
    Alike: IReadOnlyList<AlikeCauses>
    Remarks: IReadOnlyList<string>
} with

    /// A row for each cause fitted together and each cause alone.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let estimates = Seq.toArray result.Estimates
        let singles = Seq.toArray result.Singles

        let both (a: CauseEstimate -> float) (b: SingleCause -> float) =
            Array.append (Array.map a estimates) (Array.map b singles)

        StudyTable.Of(
            $"Which parts of {result.Engine} explain the readings",
            provenance,
            [|
                TableColumn.OfText(
                    "fitted",
                    Array.append
                        (estimates |> Array.map (fun _ -> "together"))
                        (singles |> Array.map (fun _ -> "alone"))
                )
                TableColumn.OfText("part", Array.append (estimates |> Array.map _.Name) (singles |> Array.map _.Name))
                TableColumn.Of("change_linear", "", both _.Linear (fun _ -> nan))
                TableColumn.Of("change", "", both _.Full _.Change)
                TableColumn.Of("standard_deviation", "", both _.StandardDeviation _.StandardDeviation)
                TableColumn.Of("chi_square", "", both (fun _ -> result.ChiSquare) _.ChiSquare)
            |]
        )

/// <summary>
/// Finds which component changes explain shifted readings: weighted least squares on the model, by Gauss and Newton with its
/// exact Jacobian. Two causes with the same signature cannot be told apart by any method; that is said, not hidden.
/// </summary>
[<AbstractClass; Sealed>]
type HealthDiagnosis private () =

    static let outputName (quantity: Quantity) =
        match quantity with
        | Quantity.NetThrust -> "net_thrust_N"
        | Quantity.FuelFlow -> "fuel_flow_kg_per_s"
        | Quantity.T3 -> "T3_K"
        | Quantity.T4 -> "T4_K"
        | Quantity.T41 -> "T41_K"
        | Quantity.T45 -> "T45_K"
        | Quantity.T5 -> "T5_K"
        | Quantity.P3 -> "P3_Pa"
        | Quantity.Epr -> "engine_pressure_ratio"
        | Quantity.N1 -> "N1_relative_speed"
        | Quantity.N2 -> "N2_relative_speed"
        | Quantity.N3 -> "N3_relative_speed"
        | other ->
            raise (
                WearException
                    $"{QuantityText.Name other} is no reading; give speeds, temperatures, pressures, fuel flow or thrust."
            )

    // Above this the angle between two signatures is less than the readings' scatter is likely to allow.
    static let alikeFrom = 0.98

    static let correlatedFrom = 0.95

    // Changes of more than a fifth are no wear: the fit is not followed beyond.
    static let mostChange = 0.2

    static let mostRounds = 60

    // A change of this share is far below what any reading shows.
    static let settled = 1e-8

    static member private Check(engine: SizedEngine, held: Limit, readings: Reading[]) =
        if readings.Length = 0 then
            raise (WearException "there are no readings; give at least one shift.")

        for reading in readings do
            let name = QuantityText.Name reading.Quantity

            if reading.Quantity = held.Quantity then
                raise (WearException $"{name} is held as the power setting; it cannot be a shifted reading too.")

            if not (reading.Sigma > 0.0 && Double.IsFinite reading.Sigma) then
                raise (WearException $"{name}: a standard deviation of {reading.Sigma}; expected above 0.")

            if not (Double.IsFinite reading.Shift) then
                raise (WearException $"{name}: the shift is not a number.")

            let spool = int reading.Quantity - int Quantity.N1

            if spool >= 1 && spool <= 2 && spool >= engine.Spools.Length then
                raise (WearException $"{engine.Definition.Name} has no spool for {name}.")

        match readings |> Seq.countBy _.Quantity |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(quantity, _) -> raise (WearException $"{QuantityText.Name quantity} is given twice.")
        | None -> ()

    /// <summary>
    /// Fits causes to readings. Every part alone is always tried and ranked; several together only where they are named (or a prior
    /// makes more of them than readings determinable).
    /// </summary>
    /// <param name="held">the power setting that the readings were taken at, as it should be and as it is</param>
    /// <param name="causes">parts fitted together, see <see cref="M:CycleSim.Studies.Wear.Parts"/>; none for the ranking alone</param>
    /// <param name="prior">standard deviation of every cause before the readings, as a share; 0 for none</param>
    /// <param name="loads">bleeds and offtakes as they were; nothing where null</param>
    /// <exception cref="T:CycleSim.Studies.WearException">
    /// More causes than readings without a prior; a reading twice, or held; no such part.
    /// </exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The expected point has no solution.</exception>
    static member Run
        (
            model: EngineModel,
            flight: FlightCondition,
            held: Limit,
            readings: IReadOnlyList<Reading>,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<string> | null)>] causes: IReadOnlyList<string> | null,
            [<Optional; DefaultParameterValue(0.0)>] prior: float,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : DiagnosisResult =
        let readings = Seq.toArray readings
        let engine = model.Engine
        HealthDiagnosis.Check(engine, held, readings)

        let causes =
            match causes with
            | null -> [||]
            | given -> Seq.toArray given

        if not (prior >= 0.0) then
            raise (WearException $"a prior of {prior}; expected 0 (none) or more.")

        match causes |> Seq.countBy id |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> raise (WearException $"cause '{name}' is given twice.")
        | None -> ()

        if causes.Length > readings.Length && prior = 0.0 then
            raise (
                WearException
                    $"{causes.Length} causes and {readings.Length} readings: more unknowns than the readings determine. Name fewer causes, give more readings, or a prior."
            )

        let m = readings.Length
        let sigma = readings |> Array.map _.Sigma
        let shift = readings |> Array.map _.Shift
        let outputs = readings |> Array.map (fun r -> outputName r.Quantity)
        let condition = flight

        // The readings, and their derivatives with respect to some parts, with changes of those parts.
        let solve (inputsOf: int[]) (changes: float[]) =
            let inputs = StudyPoints.inputs model flight loads

            let unchanged = inputsOf |> Array.map (fun input -> inputs[input])

            for input, change in Array.zip inputsOf changes do
                inputs[input] <- inputs[input] * (1.0 + change)

            let point = model.At(&condition, held.Quantity, held.Value, inputs)
            let influence = model.InfluenceOfLastPoint()

            let rows =
                outputs
                |> Array.map (fun o -> influence.Outputs |> Seq.findIndex (fun n -> n = o))

            let values = rows |> Array.map (fun row -> influence.OutputValues[row])

            let jacobian =
                Matrix.Build.Dense(
                    m,
                    inputsOf.Length,
                    fun i j -> influence[rows[i], inputsOf[j]] * unchanged[j] / sigma[i]
                )

            point, values, jacobian

        let expected, nominal, _ = solve [||] [||]

        let misses (values: float[]) =
            Array.init m (fun i -> (shift[i] - (values[i] - nominal[i])) / sigma[i])

        let squares (v: float[]) = v |> Array.sumBy (fun x -> x * x)

        // Rows of the prior below those of the readings.
        let withPrior (jacobian: Matrix<float>) (miss: float[]) (x: float[]) strength =
            if strength > 0.0 then
                let n = x.Length

                jacobian.Stack(Matrix.Build.DenseDiagonal(n, n, 1.0 / strength)),
                Array.append miss (x |> Array.map (fun value -> -value / strength))
            else
                jacobian, miss

        // Where the readings do not see a direction at all there is no step.
        let step jacobian miss x strength =
            let a, b = withPrior jacobian miss x strength
            let svd = a.Svd true

            if svd.ConditionNumber < 1e9 then
                Some((svd.Solve(Vector.Build.Dense b)).ToArray(), a, b)
            else
                None

        let unseen =
            "these readings do not determine them; a prior or other readings would be needed"

        let fit (names: string[]) strength : Result<Fit, string> =
            let inputsOf = names |> Array.map (fun name -> Wear.Input(engine, name))

            let at x =
                let _, values, jacobian = solve inputsOf x

                step jacobian (misses values) x strength
                |> Option.map (fun (move, a, b) ->
                    move,
                    {
                        First = move
                        Changes = x
                        Values = values
                        Covariance = (a.Transpose() * a).Inverse()
                        Misses = b
                        Promised = squares ((a * Vector.Build.Dense move).ToArray())
                    })

            // Full steps overshoot where the misses are large: they are halved until chi-square falls by a fair part of what
            // they promise.
            let rec refine (fitted: Fit) (move: float[]) share rounds =
                if move |> Array.forall (fun d -> abs (share * d) < settled) then
                    if fitted.Changes |> Array.exists (fun v -> abs v >= mostChange) then
                        Error $"the fit leads beyond a change of {100.0 * mostChange} %%, which is no wear"
                    else
                        Ok fitted
                elif rounds = 0 then
                    Error "the fit does not settle"
                else
                    let next =
                        Array.map2 (fun v d -> Math.Clamp(v + share * d, -mostChange, mostChange)) fitted.Changes move

                    match at next with
                    | None -> Error unseen
                    | Some(further, found) when
                        squares found.Misses <= squares fitted.Misses - 0.5 * share * fitted.Promised
                        ->
                        refine { found with First = fitted.First } further 1.0 (rounds - 1)
                    | Some _ -> refine fitted move (0.5 * share) (rounds - 1)

            try
                match at (Array.zeroCreate names.Length) with
                | None -> Error unseen
                | Some(move, fitted) -> refine fitted move 1.0 mostRounds
            with :? NoSolutionException as none ->
                Error $"on the way to the fit there is no point: {none.Message}"

        let alone =
            Wear.Parts engine
            |> Seq.map (fun name -> name, fit [| name |] 0.0)
            |> Seq.toArray

        let singles =
            alone
            |> Array.choose (fun (name, fitted) ->
                match fitted with
                | Ok fitted ->
                    Some {
                        Name = name
                        Change = fitted.Changes[0]
                        StandardDeviation = sqrt fitted.Covariance[0, 0]
                        ChiSquare = squares fitted.Misses
                    }
                | Error _ -> None)
            |> Array.sortBy _.ChiSquare

        let together = if causes.Length = 0 then None else Some(fit causes prior)

        // Signatures of the causes asked for, or of all where none is.
        let compared =
            if causes.Length > 0 then
                causes
            else
                Seq.toArray (Wear.Parts engine)

        let signatures =
            let _, _, jacobian =
                solve (compared |> Array.map (fun n -> Wear.Input(engine, n))) (Array.zeroCreate compared.Length)

            jacobian

        let alike = [|
            for i in 0 .. compared.Length - 2 do
                for j in i + 1 .. compared.Length - 1 do
                    let a, b = signatures.Column i, signatures.Column j
                    let cosine = a.DotProduct b / (a.L2Norm() * b.L2Norm())

                    if abs cosine > alikeFrom then
                        {
                            First = compared[i]
                            Second = compared[j]
                            Cosine = cosine
                        }
        |]

        let remarks = [|
            for pair in alike do
                let cosine = pair.Cosine.ToString("F3", Globalization.CultureInfo.InvariantCulture)
                let how = if pair.Cosine > 0.0 then "alike" else "opposite"
                $"{pair.First} and {pair.Second} look {how} in these readings (cosine {cosine}): they cannot tell one from the other."

            match together with
            | Some(Error reason) -> $"the parts named are not fitted together: {reason}."
            | Some(Ok fitted) ->
                let covariance = fitted.Covariance

                for i in 0 .. causes.Length - 2 do
                    for j in i + 1 .. causes.Length - 1 do
                        let correlation = covariance[i, j] / sqrt (covariance[i, i] * covariance[j, j])

                        if abs correlation > correlatedFrom then
                            let text = correlation.ToString("F3", Globalization.CultureInfo.InvariantCulture)
                            $"the estimates of {causes[i]} and {causes[j]} hang together (correlation {text}): what is given to one is taken from the other or others."
            | None -> ()

            for name, fitted in alone do
                match fitted with
                | Error reason -> $"{name} is left out of the ranking: {reason}."
                | Ok _ -> ()

            match singles |> Array.truncate 2 with
            | [| best; second |] when second.ChiSquare - best.ChiSquare < 4.0 ->
                $"{best.Name} and {second.Name} explain the readings about equally well alone."
            | _ -> ()
        |]

        let estimates, values, chiSquare =
            match together with
            | Some(Ok fitted) ->
                Array.init causes.Length (fun k -> {
                    Name = causes[k]
                    Linear = fitted.First[k]
                    Full = fitted.Changes[k]
                    StandardDeviation = sqrt fitted.Covariance[k, k]
                }),
                fitted.Values,
                squares fitted.Misses
            | _ -> [||], nominal, nan

        {
            Engine = engine.Definition.Name
            Held = held
            Expected = expected
            Singles = singles
            Estimates = estimates
            Readings =
                readings
                |> Array.mapi (fun i reading ->
                    let explained = values[i] - nominal[i]

                    {
                        Reading = reading
                        Explained = explained
                        Miss = (reading.Shift - explained) / reading.Sigma
                    })
            ChiSquare = chiSquare
            DegreesOfFreedom = m + (if prior > 0.0 then causes.Length else 0) - causes.Length
            ChiSquareOfNothing = squares (misses nominal)
            Alike = alike
            Remarks = remarks
        }
