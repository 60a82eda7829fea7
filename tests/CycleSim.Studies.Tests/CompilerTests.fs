module CycleSim.Studies.Tests.CompilerTests

open System
open System.Diagnostics
open System.IO
open Expecto

/// Has the compiler look at a script that asks studies questions, one a line; for each line what it says against it.
let private compiled (questions: string list) =
    let script = Path.Combine(Path.GetTempPath(), $"cyclesim-{Guid.NewGuid():N}.fsx")

    try
        let here = AppContext.BaseDirectory.Replace('\\', '/')

        File.WriteAllLines(
            script,
            [
                for assembly in [ "CycleSim.Core"; "CycleSim.Studies" ] do
                    $"#r \"{here}{assembly}.dll\""
                "open FSharp.Data.UnitSystems.SI.UnitSymbols"
                "open CycleSim.Reports"
                "open CycleSim.Studies"
                for index, question in List.indexed questions do
                    $"let ask{index} (model: EngineModel) = {question}"
            ]
        )

        let start =
            ProcessStartInfo("dotnet", [ "fsi"; "--quiet"; "--nologo"; "--typecheck-only"; script ])

        start.RedirectStandardError <- true
        start.RedirectStandardOutput <- true

        match Process.Start start with
        | null -> failtest "dotnet cannot be started"
        | started ->
            use fsi = started
            let error = fsi.StandardError.ReadToEndAsync()
            let output = fsi.StandardOutput.ReadToEnd()
            fsi.WaitForExit()
            // A message may go on over several lines; the next begins with the script's name.
            let said = (output + error.Result).Split(script)

            // The questions stand behind two references and three lines of "open".
            fsi.ExitCode,
            questions
            |> List.mapi (fun index _ ->
                said
                |> Array.filter (fun line -> line.StartsWith($"({index + 6},", StringComparison.Ordinal))
                |> String.concat "\n")
    finally
        File.Delete script

[<Tests>]
let tests =
    testList "units and the compiler" [
        testCase "the right units are taken" (fun () ->
            let code, said =
                compiled [
                    "FlatRating.Run(model, \"take-off\", 1500.0<m>, 0.2)"
                    "FlatRating.Run(model, \"take-off\", Units.feetToMetres 5000.0<ft>, 0.2)"
                    "RatingQuestions.Required(model, \"take-off\", 0.0<m>, 0.0, 311.0<K>, 95e3<N>)"
                ]

            Expect.equal code 0 (String.concat "\n" said))

        testCase "the wrong units do not compile" (fun () ->
            let wrong = [
                "feet for metres", "FlatRating.Run(model, \"take-off\", 5000.0<ft>, 0.2)", "ft"
                "a plain number for metres", "FlatRating.Run(model, \"take-off\", 1500.0, 0.2)", "float<m>"
                "degrees Celsius for kelvin",
                "RatingQuestions.Required(model, \"take-off\", 0.0<m>, 0.0, 38.0<degC>, 95e3<N>)",
                "degC"
                "kilonewtons for newtons",
                "RatingQuestions.Required(model, \"take-off\", 0.0<m>, 0.0, 311.0<K>, 95.0<kN>)",
                "kN"
            ]

            let code, said = compiled (wrong |> List.map (fun (_, question, _) -> question))
            Expect.notEqual code 0 "the compiler takes it"

            for (name, _, mention), against in List.zip wrong said do
                Expect.stringContains against "FS0001" $"{name}: a type mismatch"
                Expect.stringContains against mention $"{name}: which units")
    ]
