using System.Security.Cryptography;
using System.Text;
using System.Text.RegularExpressions;
using System.Xml.Linq;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;
using StreamLogit.Pipeline.Replay.Backtest;
using StreamLogit.Pipeline.Replay.Report;

namespace StreamLogit.Pipeline.Tests.Replay.Report;

public sealed partial class ReportPageTests : IDisposable
{
    private const string Nasty = "</script></style><img src=x onerror=alert(1)> \"& '\u2028";
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    private async Task<BacktestResult> RunAsync(byte[] recording, params (string Name, EngineDefinition Engine)[] variants)
    {
        var options = new BacktestOptions
        {
            Reference = new Variant("as it stands", new StreamDefinition { Engine = LoopStream.Engine, EffectiveJson = $"{{\"stream\":\"{Nasty}\"}}" }),
            Variants = [.. variants.Select(variant => new Variant(variant.Name, new StreamDefinition { Engine = variant.Engine, EffectiveJson = "{}" }))],
            Baselines = true,
            RivalField = Nasty,
        };
        FileSourceOptions[] recordings = [new(_folder.Write("quay & sons.jsonl", recording), RecordingFormat.JsonLines)];
        return await new BacktestRun(options, recordings, TimeProvider.System).RunAsync(TestContext.Current.CancellationToken);
    }

    private static EngineDefinition Slower => LoopStream.Engine with { Learning = LoopStream.Engine.Learning with { Bank = [new SgdSetting(0.001, 0, 0)] } };

    // The page closes all its elements but a few, so that an XML parser reads it once these are closed too.
    private static XDocument Parse(string html)
    {
        string xml = VoidElement().Replace(html.Replace("<!doctype html>", "", StringComparison.Ordinal), "<$1/>").Replace("&nbsp;", " ", StringComparison.Ordinal);
        return XDocument.Parse(xml);
    }

    [GeneratedRegex("<(meta [^>]*)>")]
    private static partial Regex VoidElement();

    [Fact]
    public async Task Write_NastyNames_AreTextAndThePageIsWellFormed()
    {
        var result = await RunAsync(LoopStream.Create(3000), (Nasty, Slower), ("other", Slower with { Decision = new DecisionOptions { Cutoff = 0.1 } }));

        string html = ReportPage.Write(result, Nasty, "1.2.3");

        var page = Parse(html);
        Assert.Empty(page.Descendants("img"));
        Assert.Empty(page.Descendants("script"));
        Assert.Single(page.Descendants("style"));
        Assert.Equal($"Replay of {Nasty}", page.Descendants("title").First().Value);
        Assert.Contains(page.Descendants("th"), cell => cell.Value == Nasty);
        Assert.Contains(page.Descendants("pre"), text => text.Value.Contains(Nasty, StringComparison.Ordinal));
        Assert.Contains(page.Descendants("th"), cell => cell.Value == $"rival: {Nasty}");
    }

    [Fact]
    public async Task Write_Page_LoadsNothingAndItsPolicyAllowsItsOwnStyleOnly()
    {
        var page = Parse(ReportPage.Write(await RunAsync(LoopStream.Create(2000), ("slower", Slower)), "quay", "1.2.3"));

        string policy = page.Descendants("meta").Single(meta => meta.Attribute("http-equiv") is not null).Attribute("content")!.Value;
        string hash = Convert.ToBase64String(SHA256.HashData(Encoding.UTF8.GetBytes(page.Descendants("style").Single().Value)));
        Assert.Equal($"default-src 'none'; style-src 'sha256-{hash}'; base-uri 'none'; form-action 'none'", policy);
        string[] loading = ["src", "href", "style", "onclick", "onload", "action", "background", "srcset"];
        Assert.DoesNotContain(page.Descendants().Attributes(), attribute => loading.Contains(attribute.Name.LocalName));
    }

    [Fact]
    public async Task Write_Page_CanBeReadWithoutSeeingIt()
    {
        var page = Parse(ReportPage.Write(await RunAsync(LoopStream.Create(2000), ("slower", Slower)), "quay", "1.2.3"));

        Assert.Equal("en", page.Root!.Attribute("lang")!.Value);
        Assert.Single(page.Descendants("h1"));
        Assert.All(page.Descendants("table"), table =>
        {
            Assert.NotEmpty(table.Element("caption")!.Value);
            Assert.All(table.Descendants("th"), cell => Assert.NotNull(cell.Attribute("scope")));
            int columns = table.Element("thead")!.Descendants("th").Count();
            Assert.All(table.Element("tbody")!.Elements("tr"), row => Assert.Equal(columns, row.Elements().Count()));
        });
        Assert.Equal(2, page.Descendants("svg").Count());
        Assert.All(page.Descendants("svg"), drawing => Assert.NotEmpty(drawing.Element("title")!.Value + drawing.Element("desc")!.Value));
        var ids = page.Descendants().Attributes("id").Select(id => id.Value).ToList();
        Assert.Equal(ids.Distinct(), ids);
        Assert.All(page.Descendants().Attributes("aria-labelledby").SelectMany(names => names.Value.Split(' ')), name => Assert.Contains(name, ids));
    }

    [Fact]
    public async Task Write_Page_SaysHowToGetTheSameBits()
    {
        var result = await RunAsync(LoopStream.Create(1000), ("slower", Slower));

        string html = ReportPage.Write(result, "quay", "1.2.3");

        Assert.All(
            [result.Recordings[0].Sha256!, result.Reference.ScoreHash, result.Variants[0].ScoreHash, "streamlogit 1.2.3"],
            said => Assert.Contains(said, html, StringComparison.Ordinal));
    }

    [Fact]
    public async Task Write_NothingLabelled_SaysSo()
    {
        byte[] unlabelled = Encoding.UTF8.GetBytes("""{"id":"a","time":"2026-01-01T00:00:00Z","amount":3,"country":"c"}""" + "\n");

        var page = Parse(ReportPage.Write(await RunAsync(unlabelled, ("slower", Slower)), "quay", "1.2.3"));

        Assert.Equal("There is nothing to compare: no label became known.", page.Descendants("h1").Single().Value);
    }

    [Fact]
    public async Task Write_LabelsKnownAtOnce_SaysThatTheResultIsOptimistic()
    {
        string html = ReportPage.Write(await RunAsync(LoopStream.Create(1000), ("slower", Slower)), "quay", "1.2.3");

        Assert.Contains("this result is optimistic", html, StringComparison.Ordinal);
    }
}
