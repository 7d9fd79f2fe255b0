using System.Buffers;
using System.Text;
using System.Text.Json;
using CsCheck;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Tests.Formats;

public sealed class JsonTextTests
{
    private static string WriteBytes(byte[] bytes)
    {
        var buffer = new ArrayBufferWriter<byte>();
        JsonText.WriteBytes(bytes, buffer);
        return Encoding.UTF8.GetString(buffer.WrittenSpan);
    }

    [Fact]
    public void Write_AnyText_ReadsBackTheSame() => Gen.String[Gen.Char["\0\u0001\b\t\n\f\r\u001f \"\\/az\u007f\u0080é€\uFFFD\uFEFF"], 0, 20].Sample(text =>
    {
        string json = $"\"{Encoding.UTF8.GetString(JsonText.Escape(text))}\"";
        Assert.Equal(text, JsonSerializer.Deserialize<string>(json));
    }, seed: "0000000000000");

    // Substitution of maximal subparts: The Unicode Standard 16.0, section 3.9.6, tables 3-8 to 3-11.
    [Theory]
    [InlineData("C0 AF E0 80 BF F0 81 82 41", 8)]
    [InlineData("ED A0 80 ED BF BF ED AF 41", 8)]
    [InlineData("F4 91 92 93 FF 41 80 BF 42", 7)]
    [InlineData("E1 80 E2 F0 91 92 F1 BF 41", 4)]
    public void WriteBytes_NotUtf8_ReplacesMaximalSubparts(string hex, int replacements)
    {
        string text = WriteBytes(Convert.FromHexString(hex.Replace(" ", "", StringComparison.Ordinal)));

        Assert.Equal(replacements, (text.Length - text.Replace("\\ufffd", "", StringComparison.Ordinal).Length) / 6);
    }

    [Fact]
    public void WriteBytes_AnyBytes_IsWhatADecoderGives() => Gen.Byte.Array[0, 20].Sample(bytes =>
    {
        string expected = Encoding.UTF8.GetString(bytes);
        Assert.Equal(expected, JsonSerializer.Deserialize<string>($"\"{WriteBytes(bytes)}\""));
    }, seed: "0000000000000");

    [Fact]
    public void WriteBytes_LongText_IsWholeInABufferOfItsSize()
    {
        byte[] bytes = Encoding.UTF8.GetBytes(string.Concat(Enumerable.Repeat("aé€\n", 100_000)));
        var buffer = new ArrayBufferWriter<byte>();
        JsonText.WriteBytes(bytes, buffer);

        Assert.Equal(Encoding.UTF8.GetString(bytes), JsonSerializer.Deserialize<string>($"\"{Encoding.UTF8.GetString(buffer.WrittenSpan)}\""));
        Assert.InRange(buffer.Capacity, 0, bytes.Length * 3);
    }

    [Fact]
    public void IsNumber_AnyText_IsWhatAJsonReaderSays() => Gen.String[Gen.Char["-+.eE0012"], 0, 8].Sample(text =>
        Assert.Equal(IsJsonNumber(text), JsonText.IsNumber(Encoding.UTF8.GetBytes(text))), seed: "0000000000000", iter: 20_000);

    private static bool IsJsonNumber(string text)
    {
        try
        {
            using var json = JsonDocument.Parse(text);
            return json.RootElement.ValueKind == JsonValueKind.Number;
        }
        catch (JsonException)
        {
            return false;
        }
    }
}
