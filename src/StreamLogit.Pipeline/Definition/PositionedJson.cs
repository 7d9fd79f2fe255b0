using System.Buffers;
using System.Collections.Immutable;
using System.Text;
using System.Text.Json;
using System.Text.Unicode;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Reads JSON with comments and trailing commas into a tree of values that know where they stand.</summary>
internal static class PositionedJson
{
    private const int DeepestNesting = 64;
    private const int LongestMessage = 150;
    private static ReadOnlySpan<byte> ByteOrderMark => [0xEF, 0xBB, 0xBF];

    /// <summary>The value, or null and what is wrong with the text.</summary>
    public static PositionedValue? Parse(byte[] utf8, TextPlaces places, out DefinitionError? error)
    {
        int start = utf8.AsSpan().StartsWith(ByteOrderMark) ? ByteOrderMark.Length : 0;
        if (!Utf8.IsValid(utf8))
        {
            error = new DefinitionError(places.At(ValidLength(utf8)), "", "this byte is not UTF-8: save the file in the encoding UTF-8");
            return null;
        }
        var reader = new Utf8JsonReader(utf8.AsSpan(start), new JsonReaderOptions
        {
            CommentHandling = JsonCommentHandling.Skip,
            AllowTrailingCommas = true,
            MaxDepth = DeepestNesting,
        });
        long token = 0;
        try
        {
            reader.Read();
            var value = ReadValue(ref reader);
            reader.Read();
            error = null;
            return value;
        }
        catch (JsonException exception)
        {
            // The first line of the text starts after the byte order mark.
            long inLine = (exception.BytePositionInLine ?? 0) + (exception.LineNumber is null or 0 ? start : 0);
            error = new DefinitionError(places.At(exception.LineNumber ?? 0, inLine), "", $"not JSON: {WithoutPosition(exception.Message)}");
            return null;
        }
        catch (InvalidOperationException)
        {
            error = new DefinitionError(places.At(token), "", "not JSON: a \\u escape in this string is half of a surrogate pair");
            return null;
        }

        PositionedValue ReadValue(ref Utf8JsonReader reader)
        {
            token = start + reader.TokenStartIndex;
            var place = places.At(token);
            switch (reader.TokenType)
            {
                case JsonTokenType.StartObject:
                    var members = ImmutableArray.CreateBuilder<PositionedMember>();
                    while (reader.Read() && reader.TokenType != JsonTokenType.EndObject)
                    {
                        token = start + reader.TokenStartIndex;
                        var (key, keyPlace) = (reader.GetString()!, places.At(token));
                        reader.Read();
                        members.Add(new PositionedMember(key, keyPlace, ReadValue(ref reader)));
                    }
                    return PositionedValue.Object(place, members.ToImmutable());
                case JsonTokenType.StartArray:
                    var items = ImmutableArray.CreateBuilder<PositionedValue>();
                    while (reader.Read() && reader.TokenType != JsonTokenType.EndArray) items.Add(ReadValue(ref reader));
                    return PositionedValue.List(place, items.ToImmutable());
                case JsonTokenType.String: return PositionedValue.Scalar(JsonValueKind.String, place, reader.GetString()!);
                case JsonTokenType.Number:
                    return PositionedValue.Scalar(JsonValueKind.Number, place, Encoding.ASCII.GetString(reader.ValueSpan));
                case JsonTokenType.True: return PositionedValue.Scalar(JsonValueKind.True, place);
                case JsonTokenType.False: return PositionedValue.Scalar(JsonValueKind.False, place);
                default: return PositionedValue.Scalar(JsonValueKind.Null, place);
            }
        }
    }

    private static int ValidLength(ReadOnlySpan<byte> utf8)
    {
        int valid = 0;
        while (Rune.DecodeFromUtf8(utf8[valid..], out _, out int consumed) == OperationStatus.Done) valid += consumed;
        return valid;
    }

    // The message ends with the position, and may quote all the rest of the text.
    private static string WithoutPosition(string message)
    {
        int position = message.LastIndexOf(" LineNumber:", StringComparison.Ordinal);
        string what = string.Concat((position < 0 ? message : message[..position]).Select(c => char.IsControl(c) ? ' ' : c));
        return what.Length <= LongestMessage ? what : string.Concat(what.AsSpan(0, LongestMessage), "...");
    }
}
