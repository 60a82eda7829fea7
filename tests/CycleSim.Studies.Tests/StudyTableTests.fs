module CycleSim.Studies.Tests.StudyTableTests

open System
open System.Collections.Generic
open System.Globalization
open System.IO
open Expecto
open CycleSim.Studies

let private inFolder (act: string -> unit) =
    let folder = Directory.CreateTempSubdirectory("cyclesim-").FullName

    try
        act folder
    finally
        Directory.Delete(folder, true)

let private provenance = [| KeyValuePair("engine", "demo, \"quoted\"") |]

[<Tests>]
let tests =
    testList "tables" [
        testPropertyWithConfig
            {
                FsCheckConfig.defaultConfig with
                    maxTest = 50
            }
            "a CSV file gives back the same bits and texts"
        <| fun (pairs: (float * string | null)[]) ->
            // A line break inside a text spans two lines of the file; that is for the reader of the file, not for this test.
            let text (t: string | null) =
                match t with
                | null -> ""
                | given ->
                    given
                        .ReplaceLineEndings(" ")
                        .Replace('\r', ' ')
                        .Replace('\n', ' ')
                        .Replace(',', ';')
                        .Replace('"', '\'')

            let numbers = pairs |> Array.map fst
            let texts = pairs |> Array.map (snd >> text)

            let table =
                StudyTable.Of(
                    "t",
                    provenance,
                    [| TableColumn.Of("x_m", "m", numbers); TableColumn.OfText("note", texts) |]
                )

            let rows = TableFile.CsvLines table |> Seq.skip 3 |> Seq.toArray
            Expect.equal rows.Length pairs.Length "a line for a row"

            for row, number, note in Array.zip3 rows numbers texts do
                let at = row.IndexOf ','
                let read = row[.. at - 1]
                Expect.equal row[at + 1 ..] note "the text"

                if Double.IsFinite number then
                    let back = Double.Parse(read, CultureInfo.InvariantCulture)

                    Expect.equal
                        (BitConverter.DoubleToInt64Bits back)
                        (BitConverter.DoubleToInt64Bits number)
                        "the bits"
                else
                    Expect.equal read "" "nothing stands for what does not exist"

        testCase "columns of unequal length, or two of one name, are refused"
        <| fun _ ->
            let make columns () =
                StudyTable.Of("t", provenance, columns) |> ignore

            Expect.throwsT<ArgumentException>
                (make [| TableColumn.Of("a", "", [| 1.0 |]); TableColumn.Of("b", "", [||]) |])
                "length"

            Expect.throwsT<ArgumentException>
                (make [| TableColumn.Of("a", "", [| 1.0 |]); TableColumn.Of("a", "", [| 1.0 |]) |])
                "name"

        testCase "a file that cannot be written whole leaves the old one as it was"
        <| fun _ ->
            inFolder (fun folder ->
                let path = Path.Combine(folder, "t.csv")
                File.WriteAllText(path, "old")
                Directory.CreateDirectory(path + ".writing") |> ignore
                let table = StudyTable.Of("t", provenance, [| TableColumn.Of("a", "", [| 1.0 |]) |])
                Expect.throws (fun () -> TableFile.WriteCsv(table, path)) "the side file cannot be made"
                Expect.equal (File.ReadAllText path) "old" "untouched")
    ]
