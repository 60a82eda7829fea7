namespace CycleSim.Studies

open System

/// A question that cannot be asked of an engine as it stands; the message says what is wrong with it and what was expected.
/// Each study has its own kind.
[<AbstractClass>]
type QuestionException(message: string) =
    inherit Exception(message)
