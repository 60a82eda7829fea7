namespace CycleSim.Notebooks

open System
open System.Globalization
open CycleSim.Engine

/// A table; columns behind the first so many hold numbers and are aligned right.
type internal Grid = {
    Title: string
    TextColumns: int
    Columns: string list
    Rows: string list list
}

type internal SheetPart =
    /// Names and values with their units.
    | Facts of (string * string) list
    | Grid of Grid
    /// A table shown by its title alone until opened.
    | FoldedGrid of Grid
    /// A sentence below the numbers.
    | Remark of string

/// A result as it is shown: a title over parts.
type internal Sheet = { Title: string; Parts: SheetPart list }

module internal Sheet =
    let caution =
        Remark(
            "Engineering study; not for dispatch, flight or maintenance. Approved manuals, the authority's rules and "
            + "licensed staff decide."
        )

/// SI values as bare figures in the units that tables are headed with: kN, kg/s, g/(kN s), K, kPa, kW.
module internal Figures =
    /// What stands where there is no number.
    let none = "-"

    let private written (format: string) (value: float) =
        if Double.IsFinite value then
            value.ToString(format, CultureInfo.InvariantCulture)
        else
            none

    let decimals (digits: int) (value: float) = written $"F{digits}" value
    /// Six significant figures, for values of any size.
    let general value = written "G6" value
    let small value = written "0.0E-00" value
    let force newtons = decimals 2 (newtons / 1e3)
    let flow kilogramsPerSecond = decimals 3 kilogramsPerSecond
    let fuelFlow kilogramsPerSecond = decimals 4 kilogramsPerSecond

    let sfc kilogramsPerNewtonSecond =
        decimals 3 (kilogramsPerNewtonSecond * 1e6)

    let temperature kelvin = decimals 1 kelvin
    let celsius kelvin = decimals 1 (kelvin - 273.15)
    let pressure pascals = decimals 2 (pascals / 1e3)
    let power watts = decimals 1 (watts / 1e3)
    let percent digits share = decimals digits (share * 100.0)

    let signedPercent share =
        written "+0.00;-0.00;0.00" (share * 100.0)

    let finePercent share =
        written "+0.0000;-0.0000;0.0000" (share * 100.0)

    let offset kelvin = written "+0.0;-0.0;0.0" kelvin
    let yesNo value = if value then "yes" else "no"

    /// "T41 = 1650.0 K".
    let limit (limit: Limit) =
        $"{QuantityText.Name limit.Quantity} = {QuantityText.Format(limit.Quantity, limit.Value)}"
