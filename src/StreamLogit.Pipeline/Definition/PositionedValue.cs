using System.Collections.Immutable;
using System.Text.Json;

namespace StreamLogit.Pipeline.Definition;

/// <summary>A JSON value that knows where it stands.</summary>
/// <remarks>An object keeps members with the same key, each of them, so that whoever reads it can refuse them.</remarks>
/// <param name="Kind">The kind of value.</param>
/// <param name="Place">Where it begins.</param>
/// <param name="Text">The characters of a string, the digits of a number as written; else empty.</param>
/// <param name="Members">The members of an object, as written; else empty.</param>
/// <param name="Items">The items of a list; else empty.</param>
internal sealed record PositionedValue(
    JsonValueKind Kind, DefinitionPlace Place, string Text, ImmutableArray<PositionedMember> Members, ImmutableArray<PositionedValue> Items)
{
    private const int LongestQuote = 60;

    public static PositionedValue Object(DefinitionPlace place, ImmutableArray<PositionedMember> members) =>
        new(JsonValueKind.Object, place, "", members, []);

    public static PositionedValue List(DefinitionPlace place, ImmutableArray<PositionedValue> items) =>
        new(JsonValueKind.Array, place, "", [], items);

    public static PositionedValue Scalar(JsonValueKind kind, DefinitionPlace place, string text = "") => new(kind, place, text, [], []);

    /// <summary>The value in words, for messages: <c>the string "10"</c>.</summary>
    public string Describe() => Kind switch
    {
        JsonValueKind.Object => "an object",
        JsonValueKind.Array => "a list",
        JsonValueKind.String => $"the string {Quoted.Text(Shorten(Text))}",
        JsonValueKind.Number => $"the number {Shorten(Text)}",
        JsonValueKind.True => "true",
        JsonValueKind.False => "false",
        _ => "null",
    };

    public void WriteTo(Utf8JsonWriter writer)
    {
        switch (Kind)
        {
            case JsonValueKind.Object:
                writer.WriteStartObject();
                foreach (var member in Members)
                {
                    writer.WritePropertyName(member.Key);
                    member.Value.WriteTo(writer);
                }
                writer.WriteEndObject();
                break;
            case JsonValueKind.Array:
                writer.WriteStartArray();
                foreach (var item in Items) item.WriteTo(writer);
                writer.WriteEndArray();
                break;
            case JsonValueKind.String: writer.WriteStringValue(Text); break;
            case JsonValueKind.Number: writer.WriteRawValue(Text); break;
            case JsonValueKind.True: writer.WriteBooleanValue(true); break;
            case JsonValueKind.False: writer.WriteBooleanValue(false); break;
            default: writer.WriteNullValue(); break;
        }
    }

    private static string Shorten(string text) => text.Length <= LongestQuote ? text : string.Concat(text.AsSpan(0, LongestQuote), "...");
}
