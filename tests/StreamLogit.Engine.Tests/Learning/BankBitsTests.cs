using System.Diagnostics;
using System.Runtime.InteropServices;
using System.Security.Cryptography;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Tests.Learning;

/// <summary>The same stream gives the same bits in every score and coefficient, whatever the width of the machine's registers.</summary>
public sealed class BankBitsTests
{
    private const int HashedSlots = 40;
    private const int DenseSlots = 4;

    /// <summary>
    /// The first 64 bits of the SHA-256 of 2,000 events scored and learned with every rule. If a change of the mathematics is meant to change them, every recorded
    /// score changes with them.
    /// </summary>
    private const string ExpectedHash = "FC2A5791035A8EB8";

    private static readonly SettingOptions[] AllRules =
    [
        new SgdSetting(0.05, 0, 1e-3), new SgdSetting(0.3, 0.25, 0), new SgdSetting(0.5, 0.5, 0.9), new SgdSetting(1, 1, 0),
        new SgdSetting(3, 0, 0) { IsOvershootProof = true }, new SgdSetting(0.1, 0, 0.7) { ForgetHalfLifeMicroseconds = 1000 },
        new AdagradSetting(0.1, 0), new AdagradSetting(0.05, 5), new AdagradSetting(0.2, 100) { ForgetHalfLifeMicroseconds = 5000 },
        new FtrlSetting(0.1, 1, 0, 0), new FtrlSetting(0.3, 1, 0.5, 0.1) { ForgetHalfLifeMicroseconds = 20_000 },
        new NewtonSetting(1, 1), new NewtonSetting(0.99, 10), new NewtonSetting(0.999, 1) { ForgetHalfLifeMicroseconds = 10_000 },
    ];

    public static TheoryData<int> SettingCounts => [1, 2, 3, 4, 5, 8, 13, 16, 32, 64];

    [Fact]
    public void Bank_AllRules_GivesTheRecordedBits() => Assert.Equal(ExpectedHash, Hash(AllRules, RowWidth.Widest));

    [Theory]
    [MemberData(nameof(SettingCounts))]
    public void Bank_EveryWidth_GivesTheSameBits(int count)
    {
        SettingOptions[] sgd = [.. Enumerable.Range(1, count).Select(i => new SgdSetting(0.01 * i, i % 3 * 0.4, i % 2 * 1e-3))];
        SettingOptions[] adagrad = [.. Enumerable.Range(1, count).Select(i => new AdagradSetting(0.01 * i, i % 2 * 30))];
        foreach (SettingOptions[] bank in new[] { sgd, adagrad })
        {
            string expected = Hash(bank, widestLanes: 1);
            foreach (int lanes in new[] { 2, 4, 8 }) Assert.Equal(expected, Hash(bank, lanes));
        }
    }

    [Fact]
    public void Bank_AllRulesEveryWidth_GivesTheSameBits()
    {
        string expected = Hash(AllRules, widestLanes: 1);
        foreach (int lanes in new[] { 2, 4, 8 }) Assert.Equal(expected, Hash(AllRules, lanes));
    }

    /// <summary>Runs the test of the recorded bits once more, in a process that lacks these instructions.</summary>
    [Theory]
    [InlineData("DOTNET_EnableAVX512")]
    [InlineData("DOTNET_EnableAVX2")]
    [InlineData("DOTNET_EnableHWIntrinsic")]
    public async Task Bank_WithoutInstructions_GivesTheRecordedBits(string variable)
    {
        string test = $"{typeof(BankBitsTests).FullName}.{nameof(Bank_AllRules_GivesTheRecordedBits)}";
        var start = new ProcessStartInfo("dotnet", ["exec", typeof(BankBitsTests).Assembly.Location, "-method", test, "-noColor"])
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        start.Environment[variable] = "0";
        using Process process = Process.Start(start)!;
        string output = await process.StandardOutput.ReadToEndAsync(TestContext.Current.CancellationToken);
        await process.WaitForExitAsync(TestContext.Current.CancellationToken);
        Assert.True(process.ExitCode == 0 && output.Contains("Total: 1, Errors: 0, Failed: 0", StringComparison.Ordinal), output);
    }

    private static string Hash(SettingOptions[] settings, int widestLanes)
    {
        var bank = new Bank(new LearningOptions { Bank = [.. settings], SwitchRate = 1e-3 }, HashedSlots + DenseSlots, HashedSlots, widestLanes);
        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        var random = new Random(7);
        double[] logOdds = new double[settings.Length], earlier = new double[settings.Length], reasons = new double[6];
        for (int i = 0; i < 2000; i++)
        {
            int[] slots = [.. Enumerable.Range(0, 3).Select(_ => random.Next(HashedSlots)), HashedSlots, HashedSlots + 1 + i % 2, HashedSlots + 3];
            double[] values = [1, 1, 1, random.NextDouble() * 4 - 2, random.NextDouble(), random.NextDouble() - 0.5];
            var x = new EncodedVector(slots, values);
            double published = bank.Score(in x, i * 100, logOdds);
            bool isFresh = i % 3 > 0;
            if (!isFresh) earlier.CopyTo(logOdds, 0);
            int label = random.NextDouble() < Elementary.Sigmoid(values[3] - 1) ? 1 : 0;
            bank.Learn(in x, logOdds, isFresh, label, i % 5 == 0 ? 2.5 : 1, i * 100);
            bank.PublishedCoefficients(in x, reasons);
            logOdds.CopyTo(earlier, 0);
            hash.AppendData(MemoryMarshal.AsBytes<double>([published, .. logOdds, .. reasons]));
        }
        for (int setting = 0; setting < settings.Length; setting++)
            hash.AppendData(MemoryMarshal.AsBytes<double>([bank.LogLossTotal(setting), bank.BrierTotal(setting), bank.BlendWeight(setting)]));
        return Convert.ToHexString(hash.GetHashAndReset())[..16];
    }
}
