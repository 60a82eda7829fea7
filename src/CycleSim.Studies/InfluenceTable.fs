namespace CycleSim.Studies

open System.Collections.Generic
open CycleSim.Reports

/// Influence coefficients as a table.
[<AbstractClass; Sealed>]
type InfluenceTable private () =

    /// A row for each output and input: the output's value, and its derivative with respect to the input. Units stand in the
    /// names of both, all SI; the power setting is held.
    static member Of
        (influence: Influence, point: OperatingPoint, provenance: IReadOnlyList<KeyValuePair<string, string>>)
        : StudyTable =
        let pairs = [|
            for o in 0 .. influence.Outputs.Count - 1 do
                for i in 0 .. influence.Inputs.Count - 1 -> o, i
        |]

        StudyTable.Of(
            $"Influence coefficients of {point.EngineName}",
            provenance,
            [|
                TableColumn.OfText("output", pairs |> Array.map (fun (o, _) -> influence.Outputs[o]))
                TableColumn.OfText("input", pairs |> Array.map (fun (_, i) -> influence.Inputs[i]))
                TableColumn.Of("output_value", "", pairs |> Array.map (fun (o, _) -> influence.OutputValues[o]))
                TableColumn.Of("derivative", "", pairs |> Array.map (fun (o, i) -> influence[o, i]))
            |]
        )
