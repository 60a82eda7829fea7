namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.IO
open System.Text
open Parquet
open Parquet.Schema

type internal ColumnValues =
    | Numbers of float[]
    | Texts of string[]

/// A column of a result: its name with the SI unit as suffix, as in the JSON documents ("net_thrust_N"), and either
/// numbers, in which NaN stands for a value that does not exist, or texts.
[<Sealed>]
type TableColumn internal (name: string, unit: string, values: ColumnValues) =
    member _.Name = name

    /// SI unit; empty for shares, ratios and texts.
    member _.Unit = unit

    member _.IsText =
        match values with
        | Texts _ -> true
        | Numbers _ -> false

    member _.Count =
        match values with
        | Texts texts -> texts.Length
        | Numbers numbers -> numbers.Length

    /// The numbers of a column of numbers.
    member _.Numbers: float[] =
        match values with
        | Numbers numbers -> numbers
        | Texts _ -> invalidOp $"column '{name}' holds texts"

    /// The texts of a column of texts.
    member _.Texts: string[] =
        match values with
        | Texts texts -> texts
        | Numbers _ -> invalidOp $"column '{name}' holds numbers"

    static member Of(name: string, unit: string, numbers: float[]) =
        TableColumn(name, unit, Numbers numbers)

    static member OfText(name: string, texts: string[]) = TableColumn(name, "", Texts texts)

/// What a study found as a table, with what it takes to find it again: definition, its hash, program version, options.
[<Sealed>]
type StudyTable
    private
    (title: string, provenance: IReadOnlyList<KeyValuePair<string, string>>, columns: IReadOnlyList<TableColumn>) =

    member _.Title = title
    member _.Provenance = provenance
    member _.Columns = columns
    member _.Rows = if columns.Count = 0 then 0 else columns[0].Count

    /// <exception cref="T:System.ArgumentException">No such column.</exception>
    member _.Column(name: string) : TableColumn =
        match columns |> Seq.tryFind (fun c -> c.Name = name) with
        | Some column -> column
        | None ->
            let known = columns |> Seq.map _.Name |> String.concat ", "
            raise (ArgumentException $"there is no column '{name}'; there are {known}")

    /// A number for the provenance, written so that reading it gives the same bits.
    static member Entry(name: string, value: float) =
        KeyValuePair(name, value.ToString("R", CultureInfo.InvariantCulture))

    /// <exception cref="T:System.ArgumentException">Columns of unequal length, or two of one name.</exception>
    static member Of
        (title: string, provenance: IReadOnlyList<KeyValuePair<string, string>>, columns: IReadOnlyList<TableColumn>)
        =
        for column in columns do
            if column.Count <> columns[0].Count then
                invalidArg
                    (nameof columns)
                    $"column '{column.Name}' has {column.Count} rows, '{columns[0].Name}' has {columns[0].Count}"

        match columns |> Seq.countBy _.Name |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> invalidArg (nameof columns) $"two columns are called '{name}'"
        | None -> StudyTable(title, provenance, columns)

/// Writes files that are whole or not there: written aside, then renamed.
[<AbstractClass; Sealed>]
type WholeFile private () =

    static member internal Write(path: string, write: Stream -> unit) =
        let aside = path + ".writing"

        try
            do
                use stream = File.Create aside
                write stream

            File.Move(aside, path, true)
        finally
            File.Delete aside

    /// <exception cref="T:System.IO.IOException">The file cannot be written; nothing is left behind.</exception>
    static member WriteText(path: string, text: string) : unit =
        WholeFile.Write(
            path,
            fun stream ->
                use writer = new StreamWriter(stream, UTF8Encoding false)
                writer.Write text
        )

/// Writes tables to files; see WholeFile.
[<AbstractClass; Sealed>]
type TableFile private () =

    static member internal Field(text: string) =
        if text.IndexOfAny [| ','; '"'; '\n'; '\r' |] >= 0 then
            "\"" + text.Replace("\"", "\"\"") + "\""
        else
            text

    /// Lines of a CSV file: provenance behind '#', names with units, then the rows; a value that does not exist is empty.
    /// Numbers are written so that reading them gives the same bits.
    static member CsvLines(table: StudyTable) : seq<string> =
        seq {
            yield "# " + table.Title

            for entry in table.Provenance do
                let value = entry.Value.ReplaceLineEndings " "
                yield $"# {entry.Key}: {value}"

            yield table.Columns |> Seq.map (fun c -> TableFile.Field c.Name) |> String.concat ","

            for row in 0 .. table.Rows - 1 do
                yield
                    table.Columns
                    |> Seq.map (fun c ->
                        if c.IsText then
                            TableFile.Field c.Texts[row]
                        elif not (Double.IsFinite c.Numbers[row]) then
                            ""
                        else
                            c.Numbers[row].ToString("R", CultureInfo.InvariantCulture))
                    |> String.concat ","
        }

    /// <exception cref="T:System.IO.IOException">The file cannot be written; nothing is left behind.</exception>
    static member WriteCsv(table: StudyTable, path: string) : unit =
        WholeFile.Write(
            path,
            fun stream ->
                use writer = new StreamWriter(stream, UTF8Encoding false, NewLine = "\n")

                for line in TableFile.CsvLines table do
                    writer.WriteLine line
        )

    /// Title, provenance and the units ("unit.net_thrust_N" = "N") as they stand in a Parquet file's metadata.
    static member Metadata(table: StudyTable) : IReadOnlyDictionary<string, string> =
        let metadata = Dictionary<string, string>()
        metadata["title"] <- table.Title

        for entry in table.Provenance do
            metadata[entry.Key] <- entry.Value

        for column in table.Columns do
            if column.Unit <> "" then
                metadata["unit." + column.Name] <- column.Unit

        metadata

    /// Parquet with one row group; a number that does not exist is null; provenance and units in the file's metadata.
    /// <exception cref="T:System.IO.IOException">The file cannot be written; nothing is left behind.</exception>
    static member WriteParquet(table: StudyTable, path: string) : unit =
        let field (column: TableColumn) =
            if column.IsText then
                DataField(column.Name, typeof<string>, Nullable false)
            else
                DataField(column.Name, typeof<float>, Nullable true)

        let fields = table.Columns |> Seq.map field |> Seq.toArray
        let schema = ParquetSchema(fields |> Array.map (fun f -> f :> Field))

        let write (stream: Stream) =
            task {
                let! writer = ParquetWriter.CreateAsync(schema, stream)
                use _ = writer
                writer.CustomMetadata <- TableFile.Metadata table
                use group = writer.CreateRowGroup()

                for index in 0 .. fields.Length - 1 do
                    let column = table.Columns[index]

                    if column.IsText then
                        do! group.WriteAsync(fields[index], column.Texts :> IReadOnlyCollection<string>)
                    else
                        let values =
                            column.Numbers
                            |> Array.map (fun v -> if Double.IsFinite v then Nullable v else Nullable())

                        do! group.WriteAsync<float>(fields[index], ReadOnlyMemory<Nullable<float>> values)
            }

        WholeFile.Write(path, fun stream -> (write stream).GetAwaiter().GetResult())
