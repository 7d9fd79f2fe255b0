using System.Security.Cryptography;
using System.Text.RegularExpressions;

namespace StreamLogit.Worker.Tests.Web;

/// <summary>Files of other projects are those that DEVELOPERS.md records, byte for byte.</summary>
public sealed partial class ForeignFileTests
{
    [Fact]
    public void Files_OfOtherProjects_HaveTheRecordedHash()
    {
        var recorded = Row().Matches(RepositoryFiles.Read("DEVELOPERS.md")).ToDictionary(row => row.Groups[1].Value, row => row.Groups[2].Value);

        Assert.Equal(3, recorded.Count);
        foreach (var (path, hash) in recorded) Assert.Equal((path, hash), (path, Convert.ToHexStringLower(SHA256.HashData(File.ReadAllBytes(RepositoryFiles.At(path))))));
    }

    [Fact]
    public void Plots_SayTheirVersionAndBringTheirLicence()
    {
        Assert.Contains("(v1.6.32)", RepositoryFiles.Read("src/StreamLogit.Worker/Web/Assets/uplot/uPlot.esm.js"), StringComparison.Ordinal);
        Assert.StartsWith("The MIT License (MIT)", RepositoryFiles.Read("src/StreamLogit.Worker/Web/Assets/uplot/LICENSE.txt"), StringComparison.Ordinal);
    }

    [GeneratedRegex(@"^\| `([^`]+)` \| [^|]* \| [^|]* \| `([0-9a-f]{64})` \|", RegexOptions.Multiline)]
    private static partial Regex Row();
}
