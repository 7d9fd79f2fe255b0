using System.Text;
using System.Text.Json.Nodes;
using CsCheck;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>Whatever comes in, the reader gives a definition or says what is wrong.</summary>
public sealed class FuzzTests
{
    private const int Samples = 10_000;

    private static readonly string Complete = File.ReadAllText(RepositoryFiles.At("docs/stream-definition.md"))
        .Split("```jsonc\n")[1].Split("```")[0];

    private static readonly string[] Tokens =
    [
        "{", "}", "[", "]", ":", ",", "\"", "\"stream\"", "\"features\"", "\"number\"", "\"a\"", "\"learning\"", "\"bank\"", "\"update\"", "\"sgd\"",
        "\"step\"", "\"\\ud800\"", "\"\\u0000\"", "0", "-0", "1e999", "1e-999", "9999999999999999999999", "true", "null", "//", "/*", "*/", "\n", " ", "\0", "\ufeff",
    ];

    // Numbers beyond a decimal are left out: the validator of schemas throws at them.
    private static readonly Gen<JsonNode?> Values = Gen.OneOf(
            "null", "true", "0", "1", "-1", "0.5", "2.5", "16", "1000", "1e20", "1e-20", "\"\"", "\"-\"", "\"a\"", "\"a.b\"", "\"a..b\"", "\"label\"", "\"time\"", "\"1d\"",
            "\"90s\"", "\"1e3s\"", "\"none\"", "\"csv\"", "\"a.csv\"", "\"blend\"", "\"default\"", "\"negative\"", "\"sgd\"", "[]", "{}", "[0.1,0.2]", "[\"a\",\"b\"]", "[\"a\",\"a\"]",
            "[0.1,0.1]", "{\"number\":\"a\"}", "{\"file\":\"x.csv\"}", "{\"file\":\"-\"}", "{\"a\":1,\"b\":0}", "{\"a\":0}").Select(text => JsonNode.Parse(text));

    [Fact]
    public void Read_RandomBytes_NeverThrowsAnythingElse() =>
        Gen.Byte.Array[0, 60].Check(Samples, seed: 1, utf8 => ReadOrRefuse(utf8));

    [Fact]
    public void Read_RandomTokens_NeverThrowsAnythingElse() =>
        Gen.OneOf(Tokens).Array[0, 40].Check(Samples, seed: 2, tokens => ReadOrRefuse(Encoding.UTF8.GetBytes(string.Concat(tokens))));

    [Fact]
    public void Read_DamagedDefinition_NeverThrowsAnythingElse()
    {
        byte[] whole = Encoding.UTF8.GetBytes(Complete);
        Gen.Select(Gen.Int[0, whole.Length - 1], Gen.Int[0, 8], Gen.Byte.Array[0, 8]).Array[1, 3].Check(Samples, seed: 3, cuts =>
        {
            var bytes = whole.ToList();
            foreach (var (at, removed, added) in cuts)
            {
                int start = Math.Min(at, bytes.Count);
                bytes.RemoveRange(start, Math.Min(removed, bytes.Count - start));
                bytes.InsertRange(start, added);
            }
            ReadOrRefuse([.. bytes]);
        });
    }

    [Fact]
    public void Read_RandomOverrides_NeverThrowsAnythingElse()
    {
        var text = Gen.OneOf("stream", "features", "learning", "bank", "step", "[0]", "[1]", "[\"a\"]", ".", "..", "=", "__", "0", "1", "\"", "\\", "{", "[", "]", "\ud800", "\n")
            .Array[0, 10].Select(string.Concat);
        Gen.Select(text.Array[0, 3], Gen.Select(text, text).Array[0, 3]).Check(Samples, seed: 4, sample =>
        {
            var (set, variables) = sample;
            var environment = new Dictionary<string, string>();
            foreach (var (name, value) in variables) environment["STREAMLOGIT__" + name] = value;
            ReadOrRefuse(Encoding.UTF8.GetBytes(Complete), set, environment);
        });
    }

    /// <summary>The schema may take what the reader refuses, since it cannot say everything. It must never refuse what the reader takes.</summary>
    [Fact]
    public void Schema_OfChangedDefinitions_TakesAllThatTheReaderTakes()
    {
        int read = 0, refused = 0, refusedByBoth = 0;
        Gen.Select(Gen.Int[0, 1_000_000], Values).Array[1, 2].Check(1_500, seed: 5, changes =>
        {
            var definition = JsonNode.Parse(Complete, null, new() { CommentHandling = System.Text.Json.JsonCommentHandling.Skip, AllowTrailingCommas = true })!;
            foreach (var (place, value) in changes) Replace(definition, place, value?.DeepClone());
            string json = definition.ToJsonString();
            bool taken = ReadOrRefuse(Encoding.UTF8.GetBytes(json));
            bool fits = SchemaFile.Accepts(json);
            Assert.True(fits || !taken, json);
            if (taken) read++;
            else refused++;
            if (!taken && !fits) refusedByBoth++;
        });

        Assert.True(read > 50, $"{read} were read");
        Assert.True(refusedByBoth > 0.9 * refused, $"{refusedByBoth} of {refused} were refused by both");
    }

    private static void Replace(JsonNode root, int place, JsonNode? value)
    {
        var places = new List<Action<JsonNode?>>();
        Collect(root);
        places[place % places.Count](value);

        void Collect(JsonNode? node)
        {
            if (node is JsonObject members)
            {
                foreach (string key in members.Select(member => member.Key).ToList())
                {
                    places.Add(replacement => members[key] = replacement);
                    Collect(members[key]);
                }
            }
            else if (node is JsonArray items)
            {
                for (int i = 0; i < items.Count; i++)
                {
                    int index = i;
                    places.Add(replacement => items[index] = replacement);
                    Collect(items[index]);
                }
            }
        }
    }

    private static bool ReadOrRefuse(byte[] utf8, string[]? set = null, Dictionary<string, string>? environment = null)
    {
        try
        {
            var definition = StreamDefinitionReader.Read(utf8, "quay.json", Definitions.Folder, set, environment, DefinitionUse.Fit);
            Assert.NotEmpty(definition.Engine.Features);
            Assert.InRange(definition.Engine.Learning.Bank.Length, 1, 64);
            return true;
        }
        catch (DefinitionException exception)
        {
            Assert.NotEmpty(exception.Errors);
            Assert.Equal(exception.Errors.Length, exception.Message.Split('\n').Length);
            Assert.All(exception.Errors, error => Assert.True(error.Place.Source.Length > 0 && error.Message.Length > 0));
            return false;
        }
    }
}
