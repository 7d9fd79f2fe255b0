namespace StreamLogit.Pipeline.Definition;

/// <summary>A member of a JSON object.</summary>
/// <param name="Key">Its key, escapes resolved.</param>
/// <param name="Place">Where the key stands.</param>
/// <param name="Value">Its value.</param>
internal sealed record PositionedMember(string Key, DefinitionPlace Place, PositionedValue Value);
