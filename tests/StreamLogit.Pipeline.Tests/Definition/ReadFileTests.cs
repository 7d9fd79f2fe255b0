using System.Text;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class ReadFileTests : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("streamlogit-definition-");

    public void Dispose() => _folder.Delete(recursive: true);

    [Fact]
    public void ReadFile_RelativeFiles_AreRelativeToItsFolder()
    {
        string path = Write(Definitions.With("""
            "source": { "file": "../in.ndjson" }, "scores": { "file": "out/scores.jsonl" }, "state": { "folder": "./state" }
            """));

        var definition = StreamDefinitionReader.ReadFile(path, use: DefinitionUse.Run);

        Assert.Equal(new FileSourceOptions(Path.Combine(_folder.Parent!.FullName, "in.ndjson"), RecordingFormat.JsonLines), definition.Source);
        Assert.Equal(new FileOutputOptions(Path.Combine(_folder.FullName, "out", "scores.jsonl")), definition.Scores);
        Assert.Equal(new StateOptions(Path.Combine(_folder.FullName, "state")), definition.State);
    }

    [Fact]
    public void ReadFile_StandardInput_StaysAsItIs()
    {
        string path = Write(Definitions.With("""  "source": { "file": "-", "format": "csv" } """));

        Assert.Equal(new FileSourceOptions("-", RecordingFormat.Csv), StreamDefinitionReader.ReadFile(path).Source);
    }

    [Theory]
    [InlineData("IN.CSV", RecordingFormat.Csv)]
    [InlineData("in.JsonL", RecordingFormat.JsonLines)]
    [InlineData("in.ndjson", RecordingFormat.JsonLines)]
    public void ReadFile_Extension_TellsTheFormat(string file, RecordingFormat expected)
    {
        string path = Write(Definitions.With($"\"source\": {{ \"file\": \"{file}\" }}"));

        Assert.Equal(expected, Assert.IsType<FileSourceOptions>(StreamDefinitionReader.ReadFile(path).Source).Format);
    }

    [Fact]
    public void ReadFile_FormatKey_CountsMoreThanTheExtension()
    {
        string path = Write(Definitions.With("\"source\": { \"file\": \"in.csv\", \"format\": \"jsonl\" }"));

        Assert.Equal(RecordingFormat.JsonLines, Assert.IsType<FileSourceOptions>(StreamDefinitionReader.ReadFile(path).Source).Format);
    }

    [Fact]
    public void ReadFile_Missing_IsADefinitionException()
    {
        string path = Path.Combine(_folder.FullName, "none.json");

        var exception = Assert.Throws<DefinitionException>(() => StreamDefinitionReader.ReadFile(path));

        Assert.StartsWith($"{path}: cannot be read: ", exception.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("")]
    [InlineData("\0")]
    [InlineData(".")]
    public void ReadFile_NoFileAtAll_IsADefinitionException(string path) =>
        Assert.Contains("cannot be read: ", Assert.Throws<DefinitionException>(() => StreamDefinitionReader.ReadFile(path)).Message, StringComparison.Ordinal);

    [Fact]
    public void ReadFile_LargerThanADefinitionCanBe_IsRefused()
    {
        string path = Write(Definitions.Smallest + new string(' ', 1 << 20));

        Assert.EndsWith("a definition has at most 1048576", Assert.Throws<DefinitionException>(() => StreamDefinitionReader.ReadFile(path)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ReadFile_SeveralErrors_AreOneALineInTheMessage()
    {
        string path = Write("{\n\"stream\": 5,\n\"features\": []\n}");

        Assert.Equal(
            $"{path}:2:11: stream: expected a string, found the number 5\n{path}:3:13: features: expected a list of features, at least one, found a list",
            Assert.Throws<DefinitionException>(() => StreamDefinitionReader.ReadFile(path)).Message);
    }

    [Fact]
    public void EffectiveJson_OfOverridesAndComments_IsTheDefinitionAsUsed()
    {
        string path = Write("""
            { // a comment
              "stream": "käi", "features": [ { "number": "amount", }, ], "decision": { "cutoff": 2.50e-1 } }
            """);

        var definition = StreamDefinitionReader.ReadFile(
            path, ["learning.switchRate=0", "scores.labelled=false"], new Dictionary<string, string> { ["STREAMLOGIT__stream"] = "quay" });

        Assert.Equal(
            """
            {
              "stream": "quay",
              "features": [
                {
                  "number": "amount"
                }
              ],
              "decision": {
                "cutoff": 2.50e-1
              },
              "learning": {
                "switchRate": 0
              },
              "scores": {
                "labelled": false
              }
            }
            """.ReplaceLineEndings("\n"),
            definition.EffectiveJson);
        var again = StreamDefinitionReader.Read(Encoding.UTF8.GetBytes(definition.EffectiveJson), "again", _folder.FullName);
        Assert.Equal(definition.EffectiveJson, again.EffectiveJson);
        Assert.Equal(definition.Engine.Decision, again.Engine.Decision);
    }

    private string Write(string text)
    {
        string path = Path.Combine(_folder.FullName, "quay.json");
        File.WriteAllText(path, text);
        return path;
    }
}
