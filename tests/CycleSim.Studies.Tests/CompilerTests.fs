module CycleSim.Studies.Tests.CompilerTests

open System
open System.Diagnostics
open System.IO
open Expecto

/// Has the compiler look at a script that asks studies questions, one a line; whether it takes them, and what it says.
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
            fsi.ExitCode, output + error.Result
    finally
        File.Delete script

// The compiler stops at the first mistake of a script, so each has its own.
let private refused name question (mention: string) =
    testCase $"{name} do not compile" (fun () ->
        let code, said = compiled [ question ]
        Expect.notEqual code 0 "the compiler takes it"
        Expect.stringContains said "FS0001" "a type mismatch"
        Expect.stringContains said mention "which units")

[<Tests>]
let tests =
    testList "units and the compiler" [
        testCase "the right units compile" (fun () ->
            let code, said =
                compiled [
                    "FlatRating.Run(model, \"take-off\", 1500.0<m>, 0.2)"
                    "FlatRating.Run(model, \"take-off\", Units.feetToMetres 5000.0<ft>, 0.2)"
                    "RatingQuestions.Required(model, \"take-off\", 0.0<m>, 0.0, 311.0<K>, 95e3<N>)"
                ]

            Expect.equal code 0 said)

        refused "feet for metres" "FlatRating.Run(model, \"take-off\", 5000.0<ft>, 0.2)" "ft"

        refused
            "degrees Celsius for kelvin"
            "RatingQuestions.Required(model, \"take-off\", 0.0<m>, 0.0, 38.0<degC>, 95e3<N>)"
            "degC"
    ]
