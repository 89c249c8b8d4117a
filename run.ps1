#!/usr/bin/env pwsh
# The common jobs for PowerShell users: ./run.ps1 demo | test | bench | pack
# Exits with the exit status of the tool that did the job.
param(
    [Parameter(Mandatory = $true, Position = 0)]
    [ValidateSet('demo', 'test', 'bench', 'pack')]
    [string] $Job,

    # Handed on to the tool, for example: ./run.ps1 test --filter FullyQualifiedName~Laws
    [Parameter(ValueFromRemainingArguments = $true)]
    [string[]] $Rest = @()
)

$ErrorActionPreference = 'Stop'
$status = 0
Push-Location $PSScriptRoot
try {
    switch ($Job) {
        'demo' { & dotnet run --project src/FieldSolve.Cli -c Release -- drive meshes/disc-12.toml --out results @Rest }
        'test' { & dotnet test @Rest }
        'bench' { & dotnet run --project benchmarks/FieldSolve.Benchmarks -c Release -- @Rest }
        'pack' { & dotnet pack src/FieldSolve.Cli -c Release --output artifacts @Rest }
    }

    $status = $LASTEXITCODE
}
finally {
    Pop-Location
}

exit $status
