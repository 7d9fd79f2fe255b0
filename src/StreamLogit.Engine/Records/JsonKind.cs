namespace StreamLogit.Engine.Records;

/// <summary>The kinds of JSON values.</summary>
internal enum JsonKind
{
    Null,
    False,
    True,
    Number,
    String,
    Object,
    Array,
}
